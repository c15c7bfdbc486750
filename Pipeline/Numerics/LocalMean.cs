namespace Pipeline.Numerics;

/// <summary>Running averages, for weights that must not follow the fluctuation of the bin they weigh.</summary>
static class LocalMean
{
    /// <param name="values">[n].</param>
    /// <param name="half">Neighbours on either side.</param>
    /// <returns>[n] mean over the bin and its neighbours.</returns>
    public static double[] Of(double[] values, int half)
    {
        var mean = new double[values.Length];
        for (int i = 0; i < values.Length; i++)
        {
            int from = Math.Max(0, i - half), to = Math.Min(values.Length, i + half + 1);
            double sum = 0;
            for (int k = from; k < to; k++) sum += values[k];
            mean[i] = sum / (to - from);
        }
        return mean;
    }
}
