void open_end(void)
{
    if (1) {
        open_end();
