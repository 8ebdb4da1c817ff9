#include <stdint.h>

#define DIFF_FULL   4096

uint16_t diff_word(void);

int32_t bridge_mv(void)
{
    int16_t code = (int16_t)(diff_word() << 4) >> 4;

    return code * 5000 / DIFF_FULL;
}
