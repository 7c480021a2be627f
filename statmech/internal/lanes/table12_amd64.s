// Tables of polynomials of degree 11 and 12, eight arguments at a time; see table12.go.

#include "textflag.h"
#include "lanes_amd64.h"

// REST loads c8 … c11 of two rows, at R8 plus the offsets in two registers, into
// the halves of z.
#define REST(first, second, z, y) \
	VMOVUPD 64(R8)(first*1), y \
	VINSERTF64X4 $1, 64(R8)(second*1), z, z

// func fill12(dst, x *float64, inside *uint8, groups int, from, perUnit, segments float64, rows *float64, twelve bool) bool
//
// Z0 = x, Z1 = i of the segment, Z2 = t, Z3 = t², Z4 = t⁴; Z31 = from, Z30 =
// segments, Z29 = perUnit, Z26 = 0, Z28 = 1/2, Z27 = R9 = the bytes of a row, 96
// or 104. R13 = 64 bytes of the
// stack for the offsets, in one line of the cache.
TEXT ·fill12(SB), 0, $128-73
	MOVQ dst+0(FP), DI
	MOVQ x+8(FP), SI
	MOVQ inside+16(FP), R11
	MOVQ groups+24(FP), CX
	VBROADCASTSD from+32(FP), Z31
	VBROADCASTSD perUnit+40(FP), Z29
	VBROADCASTSD segments+48(FP), Z30
	VPXORQ Z26, Z26, Z26
	MOVQ rows+56(FP), R8
	SPREAD(HALF, Z28)
	MOVBLZX twelve+64(FP), R10
	LEAQ 96(R10*8), R9
	VPBROADCASTQ R9, Z27
	LEAQ 63(SP), R13
	ANDQ $~63, R13
	XORQ DX, DX
	XORQ R12, R12

next:
	CMPQ DX, CX
	JGE  done
	VMOVUPD (SI), Z0
	VSUBPD Z31, Z0, Z2
	VMULPD Z29, Z2, Z2
	VCMPPD $0x1d, Z26, Z2, K1
	VCMPPD $0x11, Z30, Z2, K1, K2
	KORTESTB K2, K2
	KMOVB K2, (R11)(DX*1)
	JCC  some
segment:
	VRNDSCALEPD $3, Z2, Z1
	VBROADCASTSD X1, Z5
	VCMPPD $0, Z5, Z1, K3
	VADDPD Z28, Z1, Z6
	VSUBPD Z6, Z2, Z2
	VMULPD Z2, Z2, Z3
	VMULPD Z3, Z3, Z4
	KORTESTB K3, K3
	JCC  eight

	// a = c3 t + c2 + t²(c5 t + c4)
	// b = c7 t + c6 + t²(c9 t + c8) + t⁴(t² c12 + c11 t + c10)
	// ((a + t⁴ b) t + c1) t + c0
	VCVTTSD2SIQ X1, AX
	IMULQ R9, AX
	ADDQ R8, AX
	VMULPD.BCST 24(AX), Z2, Z0
	VADDPD.BCST 16(AX), Z0, Z0
	VMULPD.BCST 40(AX), Z2, Z5
	VADDPD.BCST 32(AX), Z5, Z5
	VMULPD Z3, Z5, Z5
	VADDPD Z5, Z0, Z0
	VMULPD.BCST 56(AX), Z2, Z6
	VADDPD.BCST 48(AX), Z6, Z6
	VMULPD.BCST 72(AX), Z2, Z7
	VADDPD.BCST 64(AX), Z7, Z7
	VMULPD Z3, Z7, Z7
	VADDPD Z7, Z6, Z6
	VMULPD.BCST 88(AX), Z2, Z7
	TESTL R10, R10
	JZ   oneEleven
	VMULPD.BCST 96(AX), Z3, Z5
	VADDPD Z7, Z5, Z7
oneEleven:
	VADDPD.BCST 80(AX), Z7, Z7
	VMULPD Z4, Z7, Z7
	VADDPD Z7, Z6, Z6
	VMULPD Z4, Z6, Z6
	VADDPD Z6, Z0, Z0
	VMULPD Z2, Z0, Z0
	VADDPD.BCST 8(AX), Z0, Z0
	VMULPD Z2, Z0, Z0
	VADDPD.BCST 0(AX), Z0, Z0
store:
	VMOVUPD Z0, K2, (DI)
skip:
	ADDQ $64, SI
	ADDQ $64, DI
	INCQ DX
	JMP  next

some:
	// Lanes outside are looked up in the first segment and not written.
	MOVL $1, R12
	JEQ  skip
	VMOVAPD.Z Z2, K2, Z2
	JMP  segment

eight:
	VCVTTPD2QQ Z1, Z1
	VPMULLQ Z27, Z1, Z1
	VMOVDQA64 Z1, (R13)
	TRANSPOSE
	MOVQ 0(R13), AX
	MOVQ 16(R13), BX
	REST(AX, BX, Z8, Y8)
	MOVQ 8(R13), AX
	MOVQ 24(R13), BX
	REST(AX, BX, Z9, Y9)
	MOVQ 32(R13), AX
	MOVQ 48(R13), BX
	REST(AX, BX, Z10, Y10)
	MOVQ 40(R13), AX
	MOVQ 56(R13), BX
	REST(AX, BX, Z11, Y11)
	VUNPCKLPD Z9, Z8, Z12
	VUNPCKHPD Z9, Z8, Z13
	VUNPCKLPD Z11, Z10, Z14
	VUNPCKHPD Z11, Z10, Z15
	VSHUFF64X2 $0x88, Z14, Z12, Z8  // c8
	VSHUFF64X2 $0xdd, Z14, Z12, Z10 // c10
	VSHUFF64X2 $0x88, Z15, Z13, Z9  // c9
	VSHUFF64X2 $0xdd, Z15, Z13, Z11 // c11
	VMULPD Z19, Z2, Z0
	VADDPD Z18, Z0, Z0
	VMULPD Z21, Z2, Z5
	VADDPD Z20, Z5, Z5
	VMULPD Z3, Z5, Z5
	VADDPD Z5, Z0, Z0
	VMULPD Z23, Z2, Z6
	VADDPD Z22, Z6, Z6
	VMULPD Z9, Z2, Z7
	VADDPD Z8, Z7, Z7
	VMULPD Z3, Z7, Z7
	VADDPD Z7, Z6, Z6
	VMULPD Z11, Z2, Z7
	TESTL R10, R10
	JZ   eightEleven
	KXNORB K4, K4, K4
	VXORPD X8, X8, X8
	VGATHERQPD 96(R8)(Z1*1), K4, Z8
	VMULPD Z8, Z3, Z5
	VADDPD Z7, Z5, Z7
eightEleven:
	VADDPD Z10, Z7, Z7
	VMULPD Z4, Z7, Z7
	VADDPD Z7, Z6, Z6
	VMULPD Z4, Z6, Z6
	VADDPD Z6, Z0, Z0
	VMULPD Z2, Z0, Z0
	VADDPD Z17, Z0, Z0
	VMULPD Z2, Z0, Z0
	VADDPD Z16, Z0, Z0
	JMP  store

done:
	VZEROUPPER
	MOVB R12, ret+72(FP)
	RET
