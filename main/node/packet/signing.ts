import { createHash, createPrivateKey, createPublicKey, generateKeyPairSync, type KeyObject, sign, verify } from "node:crypto";
import type { FilePort } from "#main/node/file-port.ts";
import type { WriterCheck } from "#main/node/journal.ts";
import { readJsonFile, writeWhole } from "#main/node/whole-file.ts";
import { unreadable } from "#shared/errors.ts";
import { TAG_MANIFEST } from "#shared/formats/bagit/bag-texts.ts";

/** Tag file with the signature over the bytes of the tag manifest; no manifest lists it. */
export const SIGNATURE_FILE = "signature.json";
const KEY_FORMAT = "tautline-signing-key";

interface SignatureFile {
  readonly format: "tautline-signature";
  readonly version: 1;
  readonly algorithm: "Ed25519";
  readonly of: typeof TAG_MANIFEST;
  /** Base64 of 32 bytes. */
  readonly publicKey: string;
  /** Base64 of 64 bytes. */
  readonly signature: string;
}

/** This library's Ed25519 key (RFC 8032); made when it is first asked for. */
export class SigningKey {
  readonly #files: FilePort;
  readonly #path: string;
  readonly #mayWrite: WriterCheck;
  #key: Promise<KeyObject> | null = null;

  constructor(files: FilePort, path: string, mayWrite: WriterCheck) {
    this.#files = files;
    this.#path = path;
    this.#mayWrite = mayWrite;
  }

  /** Text of the signature file for a tag manifest. @throws unreadable-input when the key's file is damaged */
  async signatureText(tagManifest: Uint8Array): Promise<string> {
    const key = await this.#open();
    const file: SignatureFile = {
      format: "tautline-signature",
      version: 1,
      algorithm: "Ed25519",
      of: TAG_MANIFEST,
      publicKey: Buffer.from(rawPublicKey(createPublicKey(key))).toString("base64"),
      signature: sign(null, tagManifest, key).toString("base64"),
    };
    return `${JSON.stringify(file, null, 2)}\n`;
  }

  async fingerprint(): Promise<string> {
    return fingerprintOf(rawPublicKey(createPublicKey(await this.#open())));
  }

  #open(): Promise<KeyObject> {
    const opened = this.#key ?? this.#readOrMake();
    this.#key = opened;
    opened.catch(() => {
      this.#key = null;
    });
    return opened;
  }

  async #readOrMake(): Promise<KeyObject> {
    const name = "signing-key.json";
    const value = (await readJsonFile(this.#files, this.#path, name)) as { format?: unknown; key?: unknown } | undefined;
    if (value !== undefined) {
      try {
        if (value?.format !== KEY_FORMAT) throw new Error("another format");
        return createPrivateKey({ key: value.key as Parameters<typeof createPrivateKey>[0] & object, format: "jwk" } as never);
      } catch {
        throw unreadable(name, "this library's signing key", "something else", undefined, "Put the file back from a copy.");
      }
    }
    const { privateKey } = generateKeyPairSync("ed25519");
    const text = JSON.stringify({ format: KEY_FORMAT, version: 1, key: privateKey.export({ format: "jwk" }) }, null, 2);
    await this.#mayWrite();
    await writeWhole(this.#files, this.#path, new TextEncoder().encode(`${text}\n`), true);
    return privateKey;
  }
}

/**
 * The public key (32 bytes) of a signature file that fits the tag manifest.
 * @throws unreadable-input when it is malformed or the signature does not fit
 */
export function verifiedKey(bytes: Uint8Array, tagManifest: Uint8Array, packet: string): Uint8Array {
  const next = "The packet was changed after it was signed, or the signature is not its own; nothing was taken in.";
  let file: Partial<SignatureFile> | null;
  try {
    file = JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes)) as Partial<SignatureFile> | null;
  } catch {
    throw unreadable(packet, "a signature in JSON", "something else", SIGNATURE_FILE, next);
  }
  const [key, signature] = [file?.publicKey, file?.signature].map((text) =>
    Buffer.from(typeof text === "string" ? text : "", "base64"),
  );
  if (file?.format !== "tautline-signature" || file.version !== 1 || file.algorithm !== "Ed25519" || file.of !== TAG_MANIFEST)
    throw unreadable(packet, `an Ed25519 signature of ${TAG_MANIFEST}`, "something else", SIGNATURE_FILE, next);
  if (key?.length !== 32 || signature?.length !== 64)
    throw unreadable(
      packet,
      "a key of 32 bytes and a signature of 64",
      `${key?.length} and ${signature?.length}`,
      SIGNATURE_FILE,
      next,
    );
  const publicKey = createPublicKey({ key: { kty: "OKP", crv: "Ed25519", x: key.toString("base64url") }, format: "jwk" });
  if (!verify(null, tagManifest, publicKey, signature))
    throw unreadable(packet, "a signature that fits the packet", "one that does not", SIGNATURE_FILE, next);
  return new Uint8Array(key);
}

/** A public key as people compare it: its SHA-256 in groups of four hex digits. */
export function fingerprintOf(publicKey: Uint8Array): string {
  return createHash("sha256").update(publicKey).digest("hex").match(/.{4}/g)!.join(" ");
}

function rawPublicKey(key: KeyObject): Uint8Array {
  return new Uint8Array(Buffer.from(key.export({ format: "jwk" }).x!, "base64url"));
}
