// Loops of the lattice that a processor with vector registers runs 512 bits at
// a time; pcg.go and spins.go have the same in Go, with the same results.

#include "textflag.h"

// Multiplier and increment of 16 steps of the generator in limbs of 52 bits,
// then what pcg.go names.
DATA pcgConstants<>+0(SB)/8, $0x000f6d3d288c03c1 // a0
DATA pcgConstants<>+8(SB)/8, $0x0009f3b315f84f6e // a1
DATA pcgConstants<>+16(SB)/8, $0x0000000000b6a423 // a2
DATA pcgConstants<>+24(SB)/8, $0x000a5d7086efd110 // c0
DATA pcgConstants<>+32(SB)/8, $0x00030df0736fdf44 // c1
DATA pcgConstants<>+40(SB)/8, $0x0000000000f970f9 // c2
DATA pcgConstants<>+48(SB)/8, $0x000fffffffffffff // mask
DATA pcgConstants<>+56(SB)/8, $0x0000000000000001 // one
DATA pcgConstants<>+64(SB)/8, $0xda942042e4dd58b5 // cheap
GLOBL pcgConstants<>(SB), RODATA|NOPTR, $72

// func fill16(dst *uint64, blocks int, limbs *[6][8]uint64)
//
// Z0-Z5 multiplier and increment, Z11-Z13 the states of lanes 0 to 7, Z14-Z16 of
// lanes 8 to 15, lowest limb first. Products of limbs are 104 bits, of which
// VPMADD52 adds the lower or the upper half to 64 bits; carries go up after the
// sums. Of the highest limb only 24 bits count.
TEXT ·fill16(SB), NOSPLIT, $0-24
	MOVQ dst+0(FP), DI
	MOVQ blocks+8(FP), CX
	MOVQ limbs+16(FP), SI
	LEAQ pcgConstants<>(SB), AX
	VPBROADCASTQ 0(AX), Z0
	VPBROADCASTQ 8(AX), Z1
	VPBROADCASTQ 16(AX), Z2
	VPBROADCASTQ 24(AX), Z3
	VPBROADCASTQ 32(AX), Z4
	VPBROADCASTQ 40(AX), Z5
	VPBROADCASTQ 48(AX), Z8
	VPBROADCASTQ 56(AX), Z9
	VPBROADCASTQ 64(AX), Z10
	VMOVDQU64 0(SI), Z11
	VMOVDQU64 64(SI), Z12
	VMOVDQU64 128(SI), Z13
	VMOVDQU64 192(SI), Z14
	VMOVDQU64 256(SI), Z15
	VMOVDQU64 320(SI), Z16

block:
	// lanes at 0
	VPSLLQ $52, Z12, Z20
	VPTERNLOGQ $0xfe, Z9, Z11, Z20     // lo | 1
	VPSRLQ $12, Z12, Z21
	VPSLLQ $40, Z13, Z22
	VPORQ Z21, Z22, Z21                // hi
	VPSRLQ $32, Z21, Z22
	VPXORQ Z21, Z22, Z21
	VPMULLQ Z10, Z21, Z21
	VPSRLQ $48, Z21, Z22
	VPXORQ Z21, Z22, Z21
	VPMULLQ Z20, Z21, Z21
	VMOVDQU64 Z21, 0(DI)

	// lanes at 64
	VPSLLQ $52, Z15, Z20
	VPTERNLOGQ $0xfe, Z9, Z14, Z20     // lo | 1
	VPSRLQ $12, Z15, Z21
	VPSLLQ $40, Z16, Z22
	VPORQ Z21, Z22, Z21                // hi
	VPSRLQ $32, Z21, Z22
	VPXORQ Z21, Z22, Z21
	VPMULLQ Z10, Z21, Z21
	VPSRLQ $48, Z21, Z22
	VPXORQ Z21, Z22, Z21
	VPMULLQ Z20, Z21, Z21
	VMOVDQU64 Z21, 64(DI)

	ADDQ $128, DI
	DECQ CX
	JZ   end

	VMOVDQA64 Z3, Z17
	VMOVDQA64 Z4, Z18
	VMOVDQA64 Z5, Z19
	VPXORQ Z23, Z23, Z23
	VPXORQ Z24, Z24, Z24
	VPMADD52LUQ Z0, Z11, Z17
	VPMADD52HUQ Z0, Z11, Z18
	VPMADD52LUQ Z0, Z12, Z23
	VPMADD52LUQ Z1, Z11, Z18
	VPMADD52HUQ Z0, Z12, Z19
	VPMADD52HUQ Z1, Z11, Z24
	VPMADD52LUQ Z0, Z13, Z19
	VPMADD52LUQ Z1, Z12, Z24
	VPMADD52LUQ Z2, Z11, Z19
	VPADDQ Z23, Z18, Z18
	VPADDQ Z24, Z19, Z19
	VPSRLQ $52, Z17, Z23
	VPADDQ Z23, Z18, Z18
	VPSRLQ $52, Z18, Z24
	VPADDQ Z24, Z19, Z13
	VPANDQ Z8, Z17, Z11
	VPANDQ Z8, Z18, Z12

	VMOVDQA64 Z3, Z25
	VMOVDQA64 Z4, Z26
	VMOVDQA64 Z5, Z27
	VPXORQ Z23, Z23, Z23
	VPXORQ Z24, Z24, Z24
	VPMADD52LUQ Z0, Z14, Z25
	VPMADD52HUQ Z0, Z14, Z26
	VPMADD52LUQ Z0, Z15, Z23
	VPMADD52LUQ Z1, Z14, Z26
	VPMADD52HUQ Z0, Z15, Z27
	VPMADD52HUQ Z1, Z14, Z24
	VPMADD52LUQ Z0, Z16, Z27
	VPMADD52LUQ Z1, Z15, Z24
	VPMADD52LUQ Z2, Z14, Z27
	VPADDQ Z23, Z26, Z26
	VPADDQ Z24, Z27, Z27
	VPSRLQ $52, Z25, Z23
	VPADDQ Z23, Z26, Z26
	VPSRLQ $52, Z26, Z24
	VPADDQ Z24, Z27, Z16
	VPANDQ Z8, Z25, Z14
	VPANDQ Z8, Z26, Z15

	JMP block

end:
	VMOVDQU64 Z11, 0(SI)
	VMOVDQU64 Z12, 64(SI)
	VMOVDQU64 Z13, 128(SI)
	VMOVDQU64 Z14, 192(SI)
	VMOVDQU64 Z15, 256(SI)
	VMOVDQU64 Z16, 320(SI)
	VZEROUPPER
	RET

// DIGIT compares a digit of 512 sites: random words at off(R10), p and q the
// digit of p and p² in all bits. See spins.go.
#define DIGIT(off, p, q) \
	VMOVDQU64 off(R10), Z8 \
	VMOVDQA64 Z5, Z9 \
	VPTERNLOGQ $0xca, q, p, Z9 \
	VPANDQ Z8, Z9, Z10 \
	VPTERNLOGQ $0xf8, Z10, Z6, Z4 \
	VPTERNLOGQ $0x60, Z8, Z9, Z6

// func update8(own, above, below, beside, side, sites *uint64, groups int, digits *[64][2]uint64, random *uint64, left int) (done, rest int)
//
// Z4 flip, Z5 one, Z6 open; Z16-Z31 the first eight digits.
TEXT ·update8(SB), NOSPLIT, $0-96
	MOVQ own+0(FP), DI
	MOVQ above+8(FP), SI
	MOVQ below+16(FP), DX
	MOVQ beside+24(FP), R8
	MOVQ side+32(FP), R9
	MOVQ sites+40(FP), R11
	MOVQ groups+48(FP), CX
	MOVQ digits+56(FP), R12
	MOVQ random+64(FP), R10
	MOVQ left+72(FP), BX
	VPBROADCASTQ 0(R12), Z16
	VPBROADCASTQ 8(R12), Z17
	VPBROADCASTQ 16(R12), Z18
	VPBROADCASTQ 24(R12), Z19
	VPBROADCASTQ 32(R12), Z20
	VPBROADCASTQ 40(R12), Z21
	VPBROADCASTQ 48(R12), Z22
	VPBROADCASTQ 56(R12), Z23
	VPBROADCASTQ 64(R12), Z24
	VPBROADCASTQ 72(R12), Z25
	VPBROADCASTQ 80(R12), Z26
	VPBROADCASTQ 88(R12), Z27
	VPBROADCASTQ 96(R12), Z28
	VPBROADCASTQ 104(R12), Z29
	VPBROADCASTQ 112(R12), Z30
	VPBROADCASTQ 120(R12), Z31

group:
	TESTQ CX, CX
	JZ    finish
	CMPQ  BX, $512
	JLT   finish
	VMOVDQU64  (DI), Z7
	VPXORQ     (SI), Z7, Z0
	VPXORQ     (DX), Z7, Z1
	VPXORQ     (R8), Z7, Z2
	VPXORQ     (R9), Z7, Z3
	VPANDQ     Z0, Z1, Z4
	VPANDQ     Z2, Z3, Z5
	VPXORQ     Z0, Z1, Z0
	VPXORQ     Z2, Z3, Z2
	VPANDQ     Z0, Z2, Z1
	VPTERNLOGQ $0xfe, Z1, Z5, Z4 // two and more disagree
	VPXORQ     Z0, Z2, Z5
	VPANDNQ    Z5, Z4, Z5        // one
	VMOVDQU64  (R11), Z1
	VPANDNQ    Z1, Z4, Z6        // open
	VPANDQ     Z1, Z4, Z4
	DIGIT(0, Z16, Z17)
	DIGIT(64, Z18, Z19)
	DIGIT(128, Z20, Z21)
	DIGIT(192, Z22, Z23)
	DIGIT(256, Z24, Z25)
	DIGIT(320, Z26, Z27)
	DIGIT(384, Z28, Z29)
	DIGIT(448, Z30, Z31)
	ADDQ $512, R10
	SUBQ $64, BX
	MOVQ $128, AX // of the next digits

more:
	VPTESTMQ Z6, Z6, K1
	KORTESTB K1, K1
	JZ       decided
	CMPQ     AX, $1024
	JEQ      decided
	VPBROADCASTQ (R12)(AX*1), Z11
	VPBROADCASTQ 8(R12)(AX*1), Z12
	DIGIT(0, Z11, Z12)
	ADDQ $64, R10
	SUBQ $8, BX
	ADDQ $16, AX
	JMP  more

decided:
	VPXORQ    Z7, Z4, Z7
	VMOVDQU64 Z7, (DI)
	ADDQ $64, DI
	ADDQ $64, SI
	ADDQ $64, DX
	ADDQ $64, R8
	ADDQ $64, R9
	ADDQ $64, R11
	DECQ CX
	JMP  group

finish:
	MOVQ groups+48(FP), AX
	SUBQ CX, AX
	MOVQ AX, done+80(FP)
	MOVQ BX, rest+88(FP)
	VZEROUPPER
	RET
