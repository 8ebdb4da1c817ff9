#define SHED 0

int analog_read(int pin);

int shed_degc(void)
{
    long code = analog_read(SHED);

    return (int)(code * 500 / 1024 - 50);
}
