#include <stdint.h>

uint16_t diff_read(void);
int32_t charge_ma;

void charge_update(void)
{
    charge_ma = (int32_t)(diff_read() & 0x0FFF) * 2500 / 2048;
}
