namespace Pipeline.Statistics;

/// <summary>Halving of a bracket: slow and certain.</summary>
static class Bisection
{
    /// <summary>Root of a function that goes from a negative value at <paramref name="low"/> to a positive one at <paramref name="high"/>.</summary>
    public static double Root(Func<double, double> f, double low, double high)
    {
        for (int k = 0; k < 200 && high - low > 1e-12 * (Math.Abs(high) + Math.Abs(low)); k++)
        {
            double middle = 0.5 * (low + high);
            if (f(middle) < 0) low = middle;
            else high = middle;
        }
        return 0.5 * (low + high);
    }
}
