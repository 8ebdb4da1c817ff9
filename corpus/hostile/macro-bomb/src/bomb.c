#include <stdint.h>

#define B0 +1
#define B1 B0 B0
#define B2 B1 B1
#define B3 B2 B2
#define B4 B3 B3
#define B5 B4 B4
#define B6 B5 B5
#define B7 B6 B6
#define B8 B7 B7
#define B9 B8 B8
#define B10 B9 B9
#define B11 B10 B10
#define B12 B11 B11
#define B13 B12 B12
#define B14 B13 B13
#define B15 B14 B14
#define B16 B15 B15
#define B17 B16 B16
#define B18 B17 B17
#define B19 B18 B18
#define B20 B19 B19
#define B21 B20 B20
#define B22 B21 B21
#define B23 B22 B22
#define B24 B23 B23
#define B25 B24 B24
#define B26 B25 B25
#define B27 B26 B26
#define B28 B27 B27
#define B29 B28 B28
#define B30 B29 B29
#define B31 B30 B30
#define B32 B31 B31
#define B33 B32 B32
#define B34 B33 B33
#define B35 B34 B34
#define B36 B35 B35
#define B37 B36 B36
#define B38 B37 B37
#define B39 B38 B38
#define B40 B39 B39

#define EGG  HEN
#define HEN  EGG

uint16_t adc_read(uint8_t ch);
extern int EGG;

uint32_t bomb_mv(void)
{
    return adc_read(2) * (33000u B40) / 4096u;
}
