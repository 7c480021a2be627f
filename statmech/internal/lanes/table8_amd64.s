// Tables of polynomials of degree 8, eight arguments at a time; see lanes.go.
// Multiplications and additions are kept apart (no FMA), as in the Go loops.

#include "textflag.h"
#include "lanes_amd64.h"

// INSIDE: K2 = the lanes of Z0 = x that are in (0, end). The carry flag is set
// if all are, the zero flag if none is.
// Z31 = 0, Z30 = end.
#define INSIDE \
	VCMPPD $0x1e, Z31, Z0, K1 \
	VCMPPD $0x11, Z30, Z0, K1, K2 \
	KORTESTB K2, K2

// SEGMENT: Z1 = i of the segment of Z0 = x, Z2 = t = 4x-(i+1/2), Z3 = t²,
// Z4 = t⁴. The carry flag is set if i is the same in all lanes.
// Z29 = 4, Z28 = 1/2.
#define SEGMENT \
	VMULPD Z29, Z0, Z2 \
	VRNDSCALEPD $3, Z2, Z1 \
	VBROADCASTSD X1, Z5 \
	VCMPPD $0, Z5, Z1, K3 \
	VADDPD Z28, Z1, Z6 \
	VSUBPD Z6, Z2, Z2 \
	VMULPD Z2, Z2, Z3 \
	VMULPD Z3, Z3, Z4 \
	KORTESTB K3, K3

// ONEROW: Z0 = the polynomial of the row of Z1 for all lanes. R8 = rows.
// q = c3 t + c2 + t²(c5 t + c4) + t⁴(t² c8 + c7 t + c6), (q t + c1) t + c0.
#define ONEROW \
	VCVTTSD2SIQ X1, AX \
	LEAQ (AX)(AX*8), AX \
	LEAQ (R8)(AX*8), AX \
	VMULPD.BCST 24(AX), Z2, Z0 \
	VADDPD.BCST 16(AX), Z0, Z0 \
	VMULPD.BCST 40(AX), Z2, Z5 \
	VADDPD.BCST 32(AX), Z5, Z5 \
	VMULPD.BCST 64(AX), Z3, Z6 \
	VMULPD.BCST 56(AX), Z2, Z7 \
	VADDPD Z7, Z6, Z6 \
	VADDPD.BCST 48(AX), Z6, Z6 \
	VMULPD Z3, Z5, Z5 \
	VMULPD Z4, Z6, Z6 \
	VADDPD Z5, Z0, Z0 \
	VADDPD Z6, Z0, Z0 \
	VMULPD Z2, Z0, Z0 \
	VADDPD.BCST 8(AX), Z0, Z0 \
	VMULPD Z2, Z0, Z0 \
	VADDPD.BCST 0(AX), Z0, Z0

// EIGHTROWS: the same where every lane has a row of its own. The rows are
// loaded and transposed, which takes a third of the time of gathering; only c8
// is gathered. R13 = 64 bytes of the stack for the offsets, in one line of the
// cache.
// Z27 = 72, the bytes of a row.
#define EIGHTROWS \
	VCVTTPD2QQ Z1, Z1 \
	VPMULLQ Z27, Z1, Z1 \
	VMOVDQA64 Z1, (R13) \
	KXNORB K4, K4, K4 \
	VXORPD X7, X7, X7 \
	VGATHERQPD 64(R8)(Z1*1), K4, Z7 \
	TRANSPOSE \
	VMULPD Z19, Z2, Z0 \
	VADDPD Z18, Z0, Z0 \
	VMULPD Z21, Z2, Z5 \
	VADDPD Z20, Z5, Z5 \
	VMULPD Z7, Z3, Z6 \
	VMULPD Z23, Z2, Z7 \
	VADDPD Z7, Z6, Z6 \
	VADDPD Z22, Z6, Z6 \
	VMULPD Z3, Z5, Z5 \
	VMULPD Z4, Z6, Z6 \
	VADDPD Z5, Z0, Z0 \
	VADDPD Z6, Z0, Z0 \
	VMULPD Z2, Z0, Z0 \
	VADDPD Z17, Z0, Z0 \
	VMULPD Z2, Z0, Z0 \
	VADDPD Z16, Z0, Z0

// func fill8(dst, v *float64, inside *uint8, groups int, num, f1, f2 float64, rows *[9]float64, end float64, divide bool) bool
TEXT ·fill8(SB), 0, $128-81
	MOVQ dst+0(FP), DI
	MOVQ v+8(FP), SI
	MOVQ inside+16(FP), R11
	MOVQ groups+24(FP), CX
	VBROADCASTSD num+32(FP), Z26
	VBROADCASTSD f1+40(FP), Z25
	VBROADCASTSD f2+48(FP), Z24
	MOVQ rows+56(FP), R8
	VBROADCASTSD end+64(FP), Z30
	MOVBLZX divide+72(FP), R9
	VPXORQ Z31, Z31, Z31
	SPREAD(FOUR, Z29)
	SPREAD(HALF, Z28)
	MOVQ $72, AX
	VPBROADCASTQ AX, Z27
	LEAQ 63(SP), R13
	ANDQ $~63, R13
	XORQ DX, DX
	XORQ R12, R12

fill:
	CMPQ DX, CX
	JGE  fillDone
	VMOVUPD (SI), Z0
	TESTL R9, R9
	JZ   fillLook
	VDIVPD Z0, Z26, Z0
fillLook:
	INSIDE
	KMOVB K2, (R11)(DX*1)
	JCC  fillSome
fillSegment:
	SEGMENT
	JCC  fillEight
	ONEROW
fillStore:
	VMULPD Z25, Z0, Z0
	VMULPD Z24, Z0, Z0
	VMOVUPD Z0, K2, (DI)
fillNext:
	ADDQ $64, SI
	ADDQ $64, DI
	INCQ DX
	JMP  fill
fillEight:
	EIGHTROWS
	JMP  fillStore
fillSome:
	// Lanes outside are looked up at 0 and not written.
	MOVL $1, R12
	JEQ  fillNext
	VMOVAPD.Z Z0, K2, Z0
	JMP  fillSegment

fillDone:
	VZEROUPPER
	MOVB R12, ret+80(FP)
	RET

// func products8(sum, y *[8]float64, w, weight *float64, n int, rows *[9]float64, end float64) int
TEXT ·products8(SB), 0, $128-64
	MOVQ sum+0(FP), DI
	MOVQ y+8(FP), AX
	MOVQ w+16(FP), SI
	MOVQ weight+24(FP), R10
	MOVQ n+32(FP), CX
	MOVQ rows+40(FP), R8
	VMOVUPD (AX), Z26
	VMOVUPD (DI), Z25
	VBROADCASTSD end+48(FP), Z30
	VPXORQ Z31, Z31, Z31
	SPREAD(FOUR, Z29)
	SPREAD(HALF, Z28)
	MOVQ $72, AX
	VPBROADCASTQ AX, Z27
	LEAQ 63(SP), R13
	ANDQ $~63, R13
	XORQ DX, DX

products:
	CMPQ DX, CX
	JGE  productsDone
	VMULPD.BCST (SI)(DX*8), Z26, Z0
	INSIDE
	JCC  productsDone
	SEGMENT
	JCC  productsEight
	ONEROW
productsAdd:
	VMULPD.BCST (R10)(DX*8), Z0, Z0
	VADDPD Z0, Z25, Z25
	INCQ DX
	JMP  products
productsEight:
	EIGHTROWS
	JMP  productsAdd

productsDone:
	VMOVUPD Z25, (DI)
	VZEROUPPER
	MOVQ DX, ret+56(FP)
	RET
