;; The dense kernel in WebAssembly SIMD: two doubles an instruction, no fused multiply-add, so that every machine gives
;; the same bits. Built into kernel-bytes.ts by scripts/build-kernel.mjs.
;;
;; A matrix is row-major with an even number of columns ("stride" = bytes of a row); rows and columns beyond its order are
;; zero. Pointers and strides are in bytes.
(module
  (memory (export "memory") 1)

  ;; Rows first .. end of c = a · b, both even. "width" = columns = rows of b, even; "packed" has room for 4 · width doubles.
  ;; Four columns of b are copied next to each other, then blocks of 4 × 4 of c are summed in eight registers. What is left
  ;; over, two columns or two rows, goes in blocks of 2 × 2.
  (func (export "multiply")
    (param $c i32) (param $a i32) (param $b i32) (param $packed i32)
    (param $stride i32) (param $width i32) (param $first i32) (param $end i32)
    (local $i i32) (local $j i32) (local $packedEnd i32) (local $from i32) (local $to i32)
    (local.set $packedEnd (i32.add (local.get $packed) (i32.shl (local.get $width) (i32.const 5))))
    (block $columnsDone
      (loop $columns
        (br_if $columnsDone (i32.gt_u (i32.add (local.get $j) (i32.const 4)) (local.get $width)))
        (local.set $from (i32.add (local.get $b) (i32.shl (local.get $j) (i32.const 3))))
        (local.set $to (local.get $packed))
        (loop $pack
          (v128.store (local.get $to) (v128.load (local.get $from)))
          (v128.store offset=16 (local.get $to) (v128.load offset=16 (local.get $from)))
          (local.set $from (i32.add (local.get $from) (local.get $stride)))
          (br_if $pack (i32.lt_u (local.tee $to (i32.add (local.get $to) (i32.const 32))) (local.get $packedEnd))))
        (local.set $i (local.get $first))
        (block $rowsDone
          (loop $rows
            (br_if $rowsDone (i32.gt_u (i32.add (local.get $i) (i32.const 4)) (local.get $end)))
            (call $block4
              (i32.add (i32.add (local.get $c) (i32.mul (local.get $i) (local.get $stride))) (i32.shl (local.get $j) (i32.const 3)))
              (i32.add (local.get $a) (i32.mul (local.get $i) (local.get $stride)))
              (local.get $packed) (local.get $packedEnd) (local.get $stride))
            (local.set $i (i32.add (local.get $i) (i32.const 4)))
            (br $rows)))
        (if (i32.lt_u (local.get $i) (local.get $end))
          (then
            (call $block2 (local.get $c) (local.get $a) (local.get $b) (local.get $stride) (local.get $width) (local.get $i) (local.get $j))
            (call $block2 (local.get $c) (local.get $a) (local.get $b) (local.get $stride) (local.get $width) (local.get $i)
              (i32.add (local.get $j) (i32.const 2)))))
        (local.set $j (i32.add (local.get $j) (i32.const 4)))
        (br $columns)))
    (if (i32.lt_u (local.get $j) (local.get $width))
      (then
        (local.set $i (local.get $first))
        (loop $rest
          (call $block2 (local.get $c) (local.get $a) (local.get $b) (local.get $stride) (local.get $width) (local.get $i) (local.get $j))
          (br_if $rest (i32.lt_u (local.tee $i (i32.add (local.get $i) (i32.const 2))) (local.get $end)))))))

  ;; 4 × 4 entries at c = four rows at a · the packed columns. Two terms of each sum a round.
  (func $block4 (param $c i32) (param $a0 i32) (param $p i32) (param $pEnd i32) (param $stride i32)
    (local $a1 i32) (local $a2 i32) (local $a3 i32)
    (local $b0 v128) (local $b1 v128) (local $x v128)
    (local $s00 v128) (local $s01 v128) (local $s10 v128) (local $s11 v128)
    (local $s20 v128) (local $s21 v128) (local $s30 v128) (local $s31 v128)
    (local.set $a1 (i32.add (local.get $a0) (local.get $stride)))
    (local.set $a2 (i32.add (local.get $a1) (local.get $stride)))
    (local.set $a3 (i32.add (local.get $a2) (local.get $stride)))
    (loop $terms
      (local.set $b0 (v128.load (local.get $p)))
      (local.set $b1 (v128.load offset=16 (local.get $p)))
      (local.set $x (v128.load64_splat (local.get $a0)))
      (local.set $s00 (f64x2.add (local.get $s00) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s01 (f64x2.add (local.get $s01) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $x (v128.load64_splat (local.get $a1)))
      (local.set $s10 (f64x2.add (local.get $s10) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s11 (f64x2.add (local.get $s11) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $x (v128.load64_splat (local.get $a2)))
      (local.set $s20 (f64x2.add (local.get $s20) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s21 (f64x2.add (local.get $s21) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $x (v128.load64_splat (local.get $a3)))
      (local.set $s30 (f64x2.add (local.get $s30) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s31 (f64x2.add (local.get $s31) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $b0 (v128.load offset=32 (local.get $p)))
      (local.set $b1 (v128.load offset=48 (local.get $p)))
      (local.set $x (v128.load64_splat offset=8 (local.get $a0)))
      (local.set $s00 (f64x2.add (local.get $s00) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s01 (f64x2.add (local.get $s01) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $x (v128.load64_splat offset=8 (local.get $a1)))
      (local.set $s10 (f64x2.add (local.get $s10) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s11 (f64x2.add (local.get $s11) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $x (v128.load64_splat offset=8 (local.get $a2)))
      (local.set $s20 (f64x2.add (local.get $s20) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s21 (f64x2.add (local.get $s21) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $x (v128.load64_splat offset=8 (local.get $a3)))
      (local.set $s30 (f64x2.add (local.get $s30) (f64x2.mul (local.get $x) (local.get $b0))))
      (local.set $s31 (f64x2.add (local.get $s31) (f64x2.mul (local.get $x) (local.get $b1))))
      (local.set $a0 (i32.add (local.get $a0) (i32.const 16)))
      (local.set $a1 (i32.add (local.get $a1) (i32.const 16)))
      (local.set $a2 (i32.add (local.get $a2) (i32.const 16)))
      (local.set $a3 (i32.add (local.get $a3) (i32.const 16)))
      (br_if $terms (i32.lt_u (local.tee $p (i32.add (local.get $p) (i32.const 64))) (local.get $pEnd))))
    (v128.store (local.get $c) (local.get $s00))
    (v128.store offset=16 (local.get $c) (local.get $s01))
    (local.set $c (i32.add (local.get $c) (local.get $stride)))
    (v128.store (local.get $c) (local.get $s10))
    (v128.store offset=16 (local.get $c) (local.get $s11))
    (local.set $c (i32.add (local.get $c) (local.get $stride)))
    (v128.store (local.get $c) (local.get $s20))
    (v128.store offset=16 (local.get $c) (local.get $s21))
    (local.set $c (i32.add (local.get $c) (local.get $stride)))
    (v128.store (local.get $c) (local.get $s30))
    (v128.store offset=16 (local.get $c) (local.get $s31)))

  ;; 2 × 2 entries of c = a · b at row i, column j.
  (func $block2 (param $c i32) (param $a i32) (param $b i32) (param $stride i32) (param $width i32) (param $i i32) (param $j i32)
    (local $a1 i32) (local $end i32) (local $y v128) (local $s0 v128) (local $s1 v128)
    (local.set $a (i32.add (local.get $a) (i32.mul (local.get $i) (local.get $stride))))
    (local.set $a1 (i32.add (local.get $a) (local.get $stride)))
    (local.set $b (i32.add (local.get $b) (i32.shl (local.get $j) (i32.const 3))))
    (local.set $end (i32.add (local.get $a) (i32.shl (local.get $width) (i32.const 3))))
    (loop $terms
      (local.set $y (v128.load (local.get $b)))
      (local.set $s0 (f64x2.add (local.get $s0) (f64x2.mul (v128.load64_splat (local.get $a)) (local.get $y))))
      (local.set $s1 (f64x2.add (local.get $s1) (f64x2.mul (v128.load64_splat (local.get $a1)) (local.get $y))))
      (local.set $b (i32.add (local.get $b) (local.get $stride)))
      (local.set $a1 (i32.add (local.get $a1) (i32.const 8)))
      (br_if $terms (i32.lt_u (local.tee $a (i32.add (local.get $a) (i32.const 8))) (local.get $end))))
    (local.set $c (i32.add (i32.add (local.get $c) (i32.mul (local.get $i) (local.get $stride))) (i32.shl (local.get $j) (i32.const 3))))
    (v128.store (local.get $c) (local.get $s0))
    (v128.store (i32.add (local.get $c) (local.get $stride)) (local.get $s1)))

  ;; target = Σ factor · source over "bytes" bytes, a multiple of 32. From "terms" to "termsEnd" stand 16 bytes a term: the
  ;; factor, the pointer to its source, 4 bytes unused. The target may be a source.
  (func (export "combine") (param $target i32) (param $bytes i32) (param $terms i32) (param $termsEnd i32)
    (local $at i32) (local $term i32) (local $source i32) (local $factor v128) (local $s0 v128) (local $s1 v128)
    (loop $entries
      (local.set $s0 (v128.const f64x2 0 0))
      (local.set $s1 (v128.const f64x2 0 0))
      (local.set $term (local.get $terms))
      (loop $each
        (local.set $factor (v128.load64_splat (local.get $term)))
        (local.set $source (i32.add (i32.load offset=8 (local.get $term)) (local.get $at)))
        (local.set $s0 (f64x2.add (local.get $s0) (f64x2.mul (local.get $factor) (v128.load (local.get $source)))))
        (local.set $s1 (f64x2.add (local.get $s1) (f64x2.mul (local.get $factor) (v128.load offset=16 (local.get $source)))))
        (br_if $each (i32.lt_u (local.tee $term (i32.add (local.get $term) (i32.const 16))) (local.get $termsEnd))))
      (local.set $source (i32.add (local.get $target) (local.get $at)))
      (v128.store (local.get $source) (local.get $s0))
      (v128.store offset=16 (local.get $source) (local.get $s1))
      (br_if $entries (i32.lt_u (local.tee $at (i32.add (local.get $at) (i32.const 32))) (local.get $bytes)))))

  ;; Four rows += factors · four pivot rows, from "at" to "end" in the first of the rows; "shift" bytes from there to the first
  ;; pivot row. The sixteen factors stand row by row. One step of state reduction, see dense-elimination.ts.
  (func (export "addRows") (param $at i32) (param $end i32) (param $shift i32) (param $stride i32) (param $factors i32)
    (local $row1 i32) (local $row2 i32) (local $row3 i32) (local $p0 i32) (local $p1 i32) (local $p2 i32) (local $p3 i32)
    (local $r0 v128) (local $r1 v128) (local $r2 v128) (local $r3 v128)
    (local.set $row1 (i32.add (local.get $at) (local.get $stride)))
    (local.set $row2 (i32.add (local.get $row1) (local.get $stride)))
    (local.set $row3 (i32.add (local.get $row2) (local.get $stride)))
    (local.set $p0 (i32.add (local.get $at) (local.get $shift)))
    (local.set $p1 (i32.add (local.get $p0) (local.get $stride)))
    (local.set $p2 (i32.add (local.get $p1) (local.get $stride)))
    (local.set $p3 (i32.add (local.get $p2) (local.get $stride)))
    (loop $entries
      (local.set $r0 (v128.load (local.get $p0)))
      (local.set $r1 (v128.load (local.get $p1)))
      (local.set $r2 (v128.load (local.get $p2)))
      (local.set $r3 (v128.load (local.get $p3)))
      (v128.store (local.get $at)
        (f64x2.add (v128.load (local.get $at))
          (f64x2.add
            (f64x2.add (f64x2.mul (v128.load64_splat offset=0 (local.get $factors)) (local.get $r0)) (f64x2.mul (v128.load64_splat offset=8 (local.get $factors)) (local.get $r1)))
            (f64x2.add (f64x2.mul (v128.load64_splat offset=16 (local.get $factors)) (local.get $r2)) (f64x2.mul (v128.load64_splat offset=24 (local.get $factors)) (local.get $r3))))))
      (v128.store (local.get $row1)
        (f64x2.add (v128.load (local.get $row1))
          (f64x2.add
            (f64x2.add (f64x2.mul (v128.load64_splat offset=32 (local.get $factors)) (local.get $r0)) (f64x2.mul (v128.load64_splat offset=40 (local.get $factors)) (local.get $r1)))
            (f64x2.add (f64x2.mul (v128.load64_splat offset=48 (local.get $factors)) (local.get $r2)) (f64x2.mul (v128.load64_splat offset=56 (local.get $factors)) (local.get $r3))))))
      (v128.store (local.get $row2)
        (f64x2.add (v128.load (local.get $row2))
          (f64x2.add
            (f64x2.add (f64x2.mul (v128.load64_splat offset=64 (local.get $factors)) (local.get $r0)) (f64x2.mul (v128.load64_splat offset=72 (local.get $factors)) (local.get $r1)))
            (f64x2.add (f64x2.mul (v128.load64_splat offset=80 (local.get $factors)) (local.get $r2)) (f64x2.mul (v128.load64_splat offset=88 (local.get $factors)) (local.get $r3))))))
      (v128.store (local.get $row3)
        (f64x2.add (v128.load (local.get $row3))
          (f64x2.add
            (f64x2.add (f64x2.mul (v128.load64_splat offset=96 (local.get $factors)) (local.get $r0)) (f64x2.mul (v128.load64_splat offset=104 (local.get $factors)) (local.get $r1)))
            (f64x2.add (f64x2.mul (v128.load64_splat offset=112 (local.get $factors)) (local.get $r2)) (f64x2.mul (v128.load64_splat offset=120 (local.get $factors)) (local.get $r3))))))
      (local.set $row1 (i32.add (local.get $row1) (i32.const 16)))
      (local.set $row2 (i32.add (local.get $row2) (i32.const 16)))
      (local.set $row3 (i32.add (local.get $row3) (i32.const 16)))
      (local.set $p0 (i32.add (local.get $p0) (i32.const 16)))
      (local.set $p1 (i32.add (local.get $p1) (i32.const 16)))
      (local.set $p2 (i32.add (local.get $p2) (i32.const 16)))
      (local.set $p3 (i32.add (local.get $p3) (i32.const 16)))
      (br_if $entries (i32.lt_u (local.tee $at (i32.add (local.get $at) (i32.const 16))) (local.get $end)))))

  ;; Row repair of "rows" rows: see repairRow in matrix-kernel.ts.
  (func (export "repair") (param $row i32) (param $rows i32) (param $stride i32)
    (local $at i32) (local $end i32) (local $v v128) (local $largest v128) (local $sum v128)
    (local $scalar f64) (local $place i32)
    (loop $nextRow
      (local.set $end (i32.add (local.get $row) (local.get $stride)))
      (local.set $largest (v128.const f64x2 0 0))
      (local.set $sum (v128.const f64x2 0 0))
      (local.set $at (local.get $row))
      (loop $entries
        (local.set $v (v128.load (local.get $at)))
        (local.set $v (v128.and (local.get $v) (f64x2.ge (local.get $v) (v128.const f64x2 0x1p-1022 0x1p-1022))))
        (v128.store (local.get $at) (local.get $v))
        (local.set $largest (f64x2.pmax (local.get $largest) (local.get $v)))
        (local.set $sum (f64x2.add (local.get $sum) (local.get $v)))
        (br_if $entries (i32.lt_u (local.tee $at (i32.add (local.get $at) (i32.const 16))) (local.get $end))))
      (local.set $scalar (f64.max (f64x2.extract_lane 0 (local.get $largest)) (f64x2.extract_lane 1 (local.get $largest))))
      (if (f64.ge (local.get $scalar) (f64.const 0.5))
        (then
          (local.set $place (local.get $row))
          (block $found
            (loop $search
              (br_if $found (f64.eq (f64.load (local.get $place)) (local.get $scalar)))
              (local.set $place (i32.add (local.get $place) (i32.const 8)))
              (br $search)))
          (f64.store (local.get $place) (f64.const 0))
          (local.set $sum (v128.const f64x2 0 0))
          (local.set $at (local.get $row))
          (loop $others
            (local.set $sum (f64x2.add (local.get $sum) (v128.load (local.get $at))))
            (br_if $others (i32.lt_u (local.tee $at (i32.add (local.get $at) (i32.const 16))) (local.get $end))))
          (f64.store (local.get $place)
            (f64.sub (f64.const 1) (f64.add (f64x2.extract_lane 0 (local.get $sum)) (f64x2.extract_lane 1 (local.get $sum))))))
        (else
          (if (f64.gt (local.get $scalar) (f64.const 0))
            (then
              (local.set $sum (f64x2.splat (f64.add (f64x2.extract_lane 0 (local.get $sum)) (f64x2.extract_lane 1 (local.get $sum)))))
              (local.set $at (local.get $row))
              (loop $divide
                (v128.store (local.get $at) (f64x2.div (v128.load (local.get $at)) (local.get $sum)))
                (br_if $divide (i32.lt_u (local.tee $at (i32.add (local.get $at) (i32.const 16))) (local.get $end))))))))
      (local.set $row (local.get $end))
      (br_if $nextRow (local.tee $rows (i32.sub (local.get $rows) (i32.const 1))))))
)
