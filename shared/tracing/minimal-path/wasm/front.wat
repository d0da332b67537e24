;; A front over a box of voxels: Dijkstra's search with buckets, 26 neighbours, in double precision. Every operation is a
;; correctly rounded single one, in the order of front-in-javascript.ts in the tests, so that the distances are the same to
;; the last bit. Nine rows of three neighbours are looked at two voxels at a time, to find those worth a closer look.
;; Built by test/tools/make-wasm.mjs. All addresses are in bytes; front-memory.ts lays the memory out and knows these places.
(module
  (import "domain" "fill" (func $fill (param i32)))
  (memory (export "memory") 1 65536)

  ;; Of the whole box, at fixed addresses:
  ;;    0  rows, 9 of 32 bytes: half edge lengths of a diagonal and a straight neighbour (2 x f64), voxel offset of the row's first
  ;;  288  voxel offsets of the 27 places around a voxel (i32)
  ;;  400  half edge lengths to them (f64)
  ;;  616  nx, ny, nz, address of the costs (i32), then 1 when costs are filled as a front arrives (i32)
  ;;  640  end of the memory in use, first free chunk of labels or 0 (i32)
  ;;  648  spacing x, y, z (f64)
  ;; Of a front, from $f on:
  ;;    0  addresses of distances (f64), marks (u8), bucket heads (i32); number of buckets less 1
  ;;   16  buckets per unit of distance (f64)
  ;;   24  bucket being emptied, labels waiting, voxels settled by the last call (i32)
  ;;   36  1 when there is a goal
  ;;   40  its source x, y, z, its voxel x, y, z, half the foresight per mm, way between them (f64)
  ;;  104  cheapest meeting (f64), its voxel (i32)
  ;; A bucket is a stack: the head points behind the last label. Labels lie in chunks of 256 bytes that begin with the head of
  ;; the chunk below.

  ;; Some more memory at the end of that in use; grows the memory by at least a MiB. Traps when there is no more.
  (func $take (export "take") (param $bytes i32) (result i32)
    (local $from i32) (local $missing i32)
    (local.set $from (i32.load offset=640 (i32.const 0)))
    (local.set $missing (i32.sub
      (i32.shr_u (i32.add (i32.add (local.get $from) (local.get $bytes)) (i32.const 65535)) (i32.const 16))
      (memory.size)))
    (if (i32.gt_s (local.get $missing) (i32.const 0)) (then
      (if (i32.lt_s (memory.grow (select (local.get $missing) (i32.const 16) (i32.gt_s (local.get $missing) (i32.const 16)))) (i32.const 0))
        (then (if (i32.lt_s (memory.grow (local.get $missing)) (i32.const 0)) (then unreachable))))))
    (i32.store offset=640 (i32.const 0) (i32.add (local.get $from) (local.get $bytes)))
    (local.get $from))

  ;; A chunk for labels.
  (func $chunk (result i32)
    (local $c i32) (local $n i32)
    (local.set $c (i32.load offset=644 (i32.const 0)))
    (if (i32.eqz (local.get $c)) (then
      (local.set $n (call $take (i32.const 65536)))
      (local.set $c (local.get $n))
      (loop $more
        (local.set $n (i32.add (local.get $n) (i32.const 256)))
        (i32.store (i32.sub (local.get $n) (i32.const 256)) (local.get $n))
        (br_if $more (i32.lt_u (i32.sub (local.get $n) (local.get $c)) (i32.const 65280))))
      (i32.store (local.get $n) (i32.const 0))))
    (i32.store offset=644 (i32.const 0) (i32.load (local.get $c)))
    (local.get $c))

  ;; Puts voxel $v on the bucket whose head lies at $head.
  (func $push (export "push") (param $head i32) (param $v i32)
    (local $tail i32) (local $c i32)
    (local.set $tail (i32.load (local.get $head)))
    (if (i32.eqz (i32.and (local.get $tail) (i32.const 255))) (then
      (local.set $c (call $chunk))
      (i32.store (local.get $c) (local.get $tail))
      (local.set $tail (i32.add (local.get $c) (i32.const 4)))))
    (i32.store (local.get $tail) (local.get $v))
    (i32.store (local.get $head) (i32.add (local.get $tail) (i32.const 4))))

  ;; Which of the 27 places around a voxel at x, y, z of the box lie in it (bit 0 = x - 1, y - 1, z - 1); never the voxel itself.
  (func $inBox (param $x i32) (param $y i32) (param $z i32) (param $nx i32) (param $ny i32) (param $nz i32) (result i32)
    (local $bits i32)
    (local.set $bits (i32.const 0x7ffdfff))
    (if (i32.eqz (local.get $x)) (then (local.set $bits (i32.and (local.get $bits) (i32.const 0x6db6db6)))))
    (if (i32.eq (local.get $x) (i32.sub (local.get $nx) (i32.const 1)))
      (then (local.set $bits (i32.and (local.get $bits) (i32.const 0x36db6db)))))
    (if (i32.eqz (local.get $y)) (then (local.set $bits (i32.and (local.get $bits) (i32.const 0x7e3f1f8)))))
    (if (i32.eq (local.get $y) (i32.sub (local.get $ny) (i32.const 1)))
      (then (local.set $bits (i32.and (local.get $bits) (i32.const 0x0fc7e3f)))))
    (if (i32.eqz (local.get $z)) (then (local.set $bits (i32.and (local.get $bits) (i32.const 0x7fffe00)))))
    (if (i32.eq (local.get $z) (i32.sub (local.get $nz) (i32.const 1)))
      (then (local.set $bits (i32.and (local.get $bits) (i32.const 0x003ffff)))))
    (local.get $bits))

  ;; What a label at x, y, z of the box waits for beside its distance.
  (func $foresight (param $f i32) (param $x f64) (param $y f64) (param $z f64) (result f64)
    (local $tx f64) (local $ty f64) (local $tz f64) (local $fx f64) (local $fy f64) (local $fz f64)
    (local.set $tx (f64.mul (f64.sub (local.get $x) (f64.load offset=64 (local.get $f))) (f64.load offset=648 (i32.const 0))))
    (local.set $ty (f64.mul (f64.sub (local.get $y) (f64.load offset=72 (local.get $f))) (f64.load offset=656 (i32.const 0))))
    (local.set $tz (f64.mul (f64.sub (local.get $z) (f64.load offset=80 (local.get $f))) (f64.load offset=664 (i32.const 0))))
    (local.set $fx (f64.mul (f64.sub (local.get $x) (f64.load offset=40 (local.get $f))) (f64.load offset=648 (i32.const 0))))
    (local.set $fy (f64.mul (f64.sub (local.get $y) (f64.load offset=48 (local.get $f))) (f64.load offset=656 (i32.const 0))))
    (local.set $fz (f64.mul (f64.sub (local.get $z) (f64.load offset=56 (local.get $f))) (f64.load offset=664 (i32.const 0))))
    (f64.mul (f64.load offset=88 (local.get $f))
      (f64.sub
        (f64.sub
          (f64.sqrt (f64.add (f64.add (f64.mul (local.get $tx) (local.get $tx)) (f64.mul (local.get $ty) (local.get $ty)))
            (f64.mul (local.get $tz) (local.get $tz))))
          (f64.sqrt (f64.add (f64.add (f64.mul (local.get $fx) (local.get $fx)) (f64.mul (local.get $fy) (local.get $fy)))
            (f64.mul (local.get $fz) (local.get $fz)))))
        (f64.load offset=96 (local.get $f)))))

  ;; Settles up to $budget voxels, and no more after $target (a voxel or -1). $other: the front to meet, or 0.
  ;; $brief: come back as soon as a voxel is settled whose surroundings had to be filled.
  (func (export "expand") (param $f i32) (param $budget i32) (param $target i32) (param $other i32) (param $brief i32)
    (local $dist i32) (local $mark i32) (local $heads i32) (local $ring i32) (local $cost i32)
    (local $nx i32) (local $ny i32) (local $nz i32) (local $filling i32) (local $goal i32) (local $perWidth f64)
    (local $otherDist i32) (local $otherMark i32)
    (local $current i32) (local $waiting i32) (local $settled i32) (local $filled i32)
    (local $head i32) (local $tail i32) (local $v i32) (local $m i32) (local $x i32) (local $y i32) (local $z i32)
    (local $border i32) (local $bits i32) (local $around i32) (local $b i32) (local $u i32) (local $row i32) (local $shift i32)
    (local $at i32) (local $c f64) (local $d f64) (local $sum f64) (local $key f64)
    (local $cc v128) (local $dd v128) (local $h v128) (local $four v128) (local $near v128) (local $far v128)
    (local.set $dist (i32.load (local.get $f)))
    (local.set $mark (i32.load offset=4 (local.get $f)))
    (local.set $heads (i32.load offset=8 (local.get $f)))
    (local.set $ring (i32.load offset=12 (local.get $f)))
    (local.set $perWidth (f64.load offset=16 (local.get $f)))
    (local.set $current (i32.load offset=24 (local.get $f)))
    (local.set $waiting (i32.load offset=28 (local.get $f)))
    (local.set $goal (i32.load offset=36 (local.get $f)))
    (local.set $nx (i32.load offset=616 (i32.const 0)))
    (local.set $ny (i32.load offset=620 (i32.const 0)))
    (local.set $nz (i32.load offset=624 (i32.const 0)))
    (local.set $cost (i32.load offset=628 (i32.const 0)))
    (local.set $filling (i32.load offset=632 (i32.const 0)))
    (if (local.get $other) (then
      (local.set $otherDist (i32.load (local.get $other)))
      (local.set $otherMark (i32.load offset=4 (local.get $other)))))
    (block $done
      (loop $next
        (br_if $done (i32.eqz (local.get $waiting)))
        (local.set $head (i32.add (local.get $heads) (i32.shl (i32.and (local.get $current) (local.get $ring)) (i32.const 2))))
        (local.set $tail (i32.load (local.get $head)))
        (if (i32.eqz (local.get $tail)) (then
          (local.set $current (i32.add (local.get $current) (i32.const 1)))
          (br $next)))
        (local.set $tail (i32.sub (local.get $tail) (i32.const 4)))
        (local.set $v (i32.load (local.get $tail)))
        (local.set $m (i32.load8_u (i32.add (local.get $mark) (local.get $v))))
        (if (i32.lt_u (local.get $m) (i32.const 32)) (then
          (local.set $x (i32.rem_u (local.get $v) (local.get $nx)))
          (local.set $y (i32.div_u (local.get $v) (local.get $nx)))
          (local.set $z (i32.div_u (local.get $y) (local.get $ny)))
          (local.set $y (i32.sub (local.get $y) (i32.mul (local.get $z) (local.get $ny))))
          (local.set $border (i32.or
            (i32.or
              (i32.ge_u (i32.sub (local.get $x) (i32.const 1)) (i32.sub (local.get $nx) (i32.const 2)))
              (i32.ge_u (i32.sub (local.get $y) (i32.const 1)) (i32.sub (local.get $ny) (i32.const 2))))
            (i32.ge_u (i32.sub (local.get $z) (i32.const 1)) (i32.sub (local.get $nz) (i32.const 2)))))
          ;; Costs are filled tile by tile before the label is taken away, so that a fill that fails leaves the front as it was.
          (if (local.get $filling) (then
            (if (i32.or
                  (i32.or
                    (i32.lt_u (i32.and (i32.add (local.get $x) (i32.const 1)) (i32.const 31)) (i32.const 2))
                    (i32.lt_u (i32.and (i32.add (local.get $y) (i32.const 1)) (i32.const 31)) (i32.const 2)))
                  (i32.or
                    (i32.lt_u (i32.and (i32.add (local.get $z) (i32.const 1)) (i32.const 31)) (i32.const 2))
                    (f32.eq (f32.load (i32.add (local.get $cost) (i32.shl (local.get $v) (i32.const 2)))) (f32.const 0))))
              (then
                (i32.store offset=24 (local.get $f) (local.get $current))
                (i32.store offset=28 (local.get $f) (local.get $waiting))
                (i32.store offset=32 (local.get $f) (local.get $settled))
                (local.set $around (i32.or (i32.const 0x2000)
                  (call $inBox (local.get $x) (local.get $y) (local.get $z) (local.get $nx) (local.get $ny) (local.get $nz))))
                (loop $look
                  (local.set $u (i32.add (local.get $v)
                    (i32.load offset=288 (i32.shl (i32.ctz (local.get $around)) (i32.const 2)))))
                  (if (f32.eq (f32.load (i32.add (local.get $cost) (i32.shl (local.get $u) (i32.const 2)))) (f32.const 0)) (then
                    (local.set $filled (i32.const 1))
                    (call $fill (local.get $u))))
                  (local.set $around (i32.and (local.get $around) (i32.sub (local.get $around) (i32.const 1))))
                  (br_if $look (local.get $around)))))))))
        ;; The label leaves its bucket, and an empty chunk the bucket.
        (if (i32.eq (i32.and (local.get $tail) (i32.const 255)) (i32.const 4))
          (then
            (local.set $at (i32.sub (local.get $tail) (i32.const 4)))
            (i32.store (local.get $head) (i32.load (local.get $at)))
            (i32.store (local.get $at) (i32.load offset=644 (i32.const 0)))
            (i32.store offset=644 (i32.const 0) (local.get $at)))
          (else (i32.store (local.get $head) (local.get $tail))))
        (local.set $waiting (i32.sub (local.get $waiting) (i32.const 1)))
        (br_if $next (i32.ge_u (local.get $m) (i32.const 32)))

        (i32.store8 (i32.add (local.get $mark) (local.get $v)) (i32.or (local.get $m) (i32.const 32)))
        (local.set $settled (i32.add (local.get $settled) (i32.const 1)))
        (local.set $d (f64.load (i32.add (local.get $dist) (i32.shl (local.get $v) (i32.const 3)))))
        (if (local.get $other) (then
          (if (i32.load8_u (i32.add (local.get $otherMark) (local.get $v))) (then
            (local.set $sum (f64.add (local.get $d)
              (f64.load (i32.add (local.get $otherDist) (i32.shl (local.get $v) (i32.const 3))))))
            (if (f64.lt (local.get $sum) (f64.load offset=104 (local.get $f))) (then
              (f64.store offset=104 (local.get $f) (local.get $sum))
              (i32.store offset=112 (local.get $f) (local.get $v))))))))
        (local.set $c (f64.promote_f32 (f32.load (i32.add (local.get $cost) (i32.shl (local.get $v) (i32.const 2))))))
        (if (local.get $border)
          (then
            (local.set $bits
              (call $inBox (local.get $x) (local.get $y) (local.get $z) (local.get $nx) (local.get $ny) (local.get $nz))))
          (else
            ;; Of three voxels in a row, those that were not seen or that this way would bring closer.
            (local.set $bits (i32.const 0))
            (local.set $row (i32.const 0))
            (local.set $shift (i32.const 0))
            (local.set $cc (f64x2.splat (local.get $c)))
            (local.set $dd (f64x2.splat (local.get $d)))
            (loop $rows
              (local.set $h (v128.load (local.get $row)))
              (local.set $u (i32.add (local.get $v) (i32.load offset=16 (local.get $row))))
              (local.set $four (v128.load (i32.add (local.get $cost) (i32.shl (local.get $u) (i32.const 2)))))
              (local.set $at (i32.add (local.get $dist) (i32.shl (local.get $u) (i32.const 3))))
              (local.set $near (v128.load (local.get $at)))
              (local.set $far (v128.load offset=16 (local.get $at)))
              (local.set $bits (i32.or (local.get $bits) (i32.shl
                (i32.or
                  (i64x2.bitmask (v128.or
                    (f64x2.lt
                      (f64x2.add (local.get $dd)
                        (f64x2.mul (f64x2.add (local.get $cc) (f64x2.promote_low_f32x4 (local.get $four))) (local.get $h)))
                      (local.get $near))
                    (i64x2.eq (local.get $near) (v128.const i64x2 0 0))))
                  (i32.shl
                    (i32.and (i32.const 1) (i64x2.bitmask (v128.or
                      (f64x2.lt
                        (f64x2.add (local.get $dd)
                          (f64x2.mul
                            (f64x2.add (local.get $cc)
                              (f64x2.promote_low_f32x4
                                (i8x16.shuffle 8 9 10 11 12 13 14 15 8 9 10 11 12 13 14 15 (local.get $four) (local.get $four))))
                            (local.get $h)))
                        (local.get $far))
                      (i64x2.eq (local.get $far) (v128.const i64x2 0 0)))))
                    (i32.const 2)))
                (local.get $shift))))
              (local.set $shift (i32.add (local.get $shift) (i32.const 3)))
              (local.set $row (i32.add (local.get $row) (i32.const 32)))
              (br_if $rows (i32.lt_u (local.get $row) (i32.const 288))))))
        (if (local.get $bits) (then
          (loop $relax
            (local.set $b (i32.ctz (local.get $bits)))
            (local.set $u (i32.add (local.get $v) (i32.load offset=288 (i32.shl (local.get $b) (i32.const 2)))))
            (local.set $sum (f64.add (local.get $d) (f64.mul
              (f64.add (local.get $c)
                (f64.promote_f32 (f32.load (i32.add (local.get $cost) (i32.shl (local.get $u) (i32.const 2))))))
              (f64.load offset=400 (i32.shl (local.get $b) (i32.const 3))))))
            (local.set $at (i32.add (local.get $dist) (i32.shl (local.get $u) (i32.const 3))))
            (if (i32.or
                  (f64.lt (local.get $sum) (f64.load (local.get $at)))
                  (i32.and (i64.eqz (i64.load (local.get $at))) (f64.lt (local.get $sum) (f64.const inf))))
              (then
                (f64.store (local.get $at) (local.get $sum))
                ;; 1 to 26, without the voxel itself.
                (i32.store8 (i32.add (local.get $mark) (local.get $u))
                  (i32.add (local.get $b) (i32.lt_u (local.get $b) (i32.const 13))))
                (local.set $key (local.get $sum))
                (if (local.get $goal) (then
                  (local.set $key (f64.max (f64.const 0) (f64.add (local.get $sum) (call $foresight (local.get $f)
                    (f64.convert_i32_s (i32.add (local.get $x) (i32.sub (i32.rem_u (local.get $b) (i32.const 3)) (i32.const 1))))
                    (f64.convert_i32_s (i32.add (local.get $y)
                      (i32.sub (i32.rem_u (i32.div_u (local.get $b) (i32.const 3)) (i32.const 3)) (i32.const 1))))
                    (f64.convert_i32_s (i32.add (local.get $z) (i32.sub (i32.div_u (local.get $b) (i32.const 9)) (i32.const 1))))))))))
                (local.set $head (i32.add (local.get $heads) (i32.shl
                  (i32.and (i32.trunc_sat_f64_s (f64.mul (local.get $key) (local.get $perWidth))) (local.get $ring))
                  (i32.const 2))))
                (local.set $tail (i32.load (local.get $head)))
                (if (i32.and (local.get $tail) (i32.const 255))
                  (then
                    (i32.store (local.get $tail) (local.get $u))
                    (i32.store (local.get $head) (i32.add (local.get $tail) (i32.const 4))))
                  (else (call $push (local.get $head) (local.get $u))))
                (local.set $waiting (i32.add (local.get $waiting) (i32.const 1)))))
            (local.set $bits (i32.and (local.get $bits) (i32.sub (local.get $bits) (i32.const 1))))
            (br_if $relax (local.get $bits)))))
        (br_if $done (i32.eq (local.get $v) (local.get $target)))
        (br_if $done (i32.and (local.get $filled) (local.get $brief)))
        (br_if $next (i32.lt_s (local.get $settled) (local.get $budget)))))
    (i32.store offset=24 (local.get $f) (local.get $current))
    (i32.store offset=28 (local.get $f) (local.get $waiting))
    (i32.store offset=32 (local.get $f) (local.get $settled))))
