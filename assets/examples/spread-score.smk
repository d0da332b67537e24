# Spreads `tautline score` over a cluster in shares and gathers them into one answer, the same as from one machine.
# A Snakemake workflow (Debian: apt-get install snakemake). On this machine:
#
#   snakemake --snakefile assets/examples/spread-score.smk --cores 2 \
#       --config candidates=demo reference=demo/true.chordae.json shares=4 out=demo/score
#
# On a cluster give Snakemake its executor (for example --cluster "sbatch ..."): every share is a job of its own.
# Gates are judged once, after gathering: the summary says which failed.

TAUTLINE = config.get("tautline", "npx tautline")
SHARES = int(config.get("shares", 4))
OUT = config["out"]


rule gather:
    input: expand(OUT + "/share-{i}.jsonl", i=range(1, SHARES + 1))
    output: OUT + "/score.json"
    # Exit 1 says that a gate failed: the answer is whole all the same.
    shell: "{TAUTLINE} gather {input} --json > {output} || [ $? -eq 1 ]"


rule share:
    input: reference=config["reference"], candidates=config["candidates"]
    output: OUT + "/share-{i}.jsonl"
    shell: "{TAUTLINE} score {input.candidates} --reference {input.reference} --shard {wildcards.i}/{SHARES} > {output}"
