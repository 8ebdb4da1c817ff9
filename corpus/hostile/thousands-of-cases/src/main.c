#include <stdint.h>

extern uint16_t adc_read(uint8_t input);
uint32_t good_mv, many_mv;

#define ONE(n) case n: many_mv = code * 8u + (n) % 7; break;
#define TEN(n) ONE(n) ONE(n + 1) ONE(n + 2) ONE(n + 3) ONE(n + 4) ONE(n + 5) ONE(n + 6) ONE(n + 7) ONE(n + 8) ONE(n + 9)
#define HUNDRED(n) TEN(n) TEN(n + 10) TEN(n + 20) TEN(n + 30) TEN(n + 40) TEN(n + 50) TEN(n + 60) TEN(n + 70) TEN(n + 80) TEN(n + 90)
#define THOUSAND(n) HUNDRED(n) HUNDRED(n + 100) HUNDRED(n + 200) HUNDRED(n + 300) HUNDRED(n + 400) \
    HUNDRED(n + 500) HUNDRED(n + 600) HUNDRED(n + 700) HUNDRED(n + 800) HUNDRED(n + 900)

void good(void)
{
    good_mv = (uint32_t)adc_read(1) * 3000u * 11u / 4096u;
}

void many(void)
{
    uint16_t code = adc_read(2);

    switch (code) {
    THOUSAND(0)
    THOUSAND(1000)
    default:
        many_mv = 0;
    }
}
