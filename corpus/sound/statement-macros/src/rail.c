#include <stdint.h>

#define STORE(to, what)     do { (to) = (what); stamp++; } while (0)
#define VREF_MV             3000u
#define FULL                4096u

_Static_assert(FULL == 1u << 12, "12 bits");

enum { RAIL = 4 };
uint16_t adc_sample(int which);
int      bus_lock(void);
void     bus_unlock(void);

uint32_t rail_mv, stamp;

int rail_poll(void)
{
    int      err;
    uint32_t mv;

    if ((err = bus_lock()) != 0)
        goto out;
    mv = adc_sample(RAIL), mv *= VREF_MV * 6u;
    STORE(rail_mv, mv / FULL);
    bus_unlock();
out:
    return err;
}
