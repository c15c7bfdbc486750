using MathNet.Numerics.Distributions;
using Pipeline.Statistics;

namespace Pipeline.Tests.CrossChecks;

/// <summary>The models of scipy_values.py with their derivatives.</summary>
static class Models
{
    /// <summary>Number, mean and width of a Gaussian integrated over unit bins about x.</summary>
    public static MeanFunction Gaussian(double[] x) => (p, means, slopes) =>
    {
        for (int i = 0; i < x.Length; i++)
        {
            double high = (x[i] + 0.5 - p[1]) / p[2], low = (x[i] - 0.5 - p[1]) / p[2], share = Normal.CDF(0, 1, high) - Normal.CDF(0, 1, low);
            means[i] = p[0] * share;
            if (slopes.IsEmpty) continue;
            double atHigh = Normal.PDF(0, 1, high), atLow = Normal.PDF(0, 1, low);
            (slopes[3 * i], slopes[3 * i + 1], slopes[3 * i + 2]) = (share, -p[0] * (atHigh - atLow) / p[2], -p[0] * (high * atHigh - low * atLow) / p[2]);
        }
    };

    /// <summary>Amplitude, constant and 1/e time of a decay.</summary>
    public static MeanFunction Decay(double[] x) => (p, means, slopes) =>
    {
        for (int i = 0; i < x.Length; i++)
        {
            double e = Math.Exp(-x[i] / p[2]);
            means[i] = p[0] * e + p[1];
            if (!slopes.IsEmpty) (slopes[3 * i], slopes[3 * i + 1], slopes[3 * i + 2]) = (e, 1, p[0] * e * x[i] / (p[2] * p[2]));
        }
    };
}
