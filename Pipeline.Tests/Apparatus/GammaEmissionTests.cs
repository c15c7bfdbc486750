using System.Globalization;
using MathNet.Numerics.Integration;
using Pipeline.Apparatus;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Apparatus;

public class GammaEmissionTests
{
    /// <remarks>scipy 1.10.1: gamma.cdf(t, k) and t gamma.cdf(t, k) - k gamma.cdf(t, k + 1), at t = share of k. The second is a difference:
    /// its last digits go where t is large or small. Tolerance: 1e-13 of the value or of t.</remarks>
    [Theory]
    [InlineData(0.4, 0.01, 0.12367308203779037, 0.000353519840804504)]
    [InlineData(0.4, 0.5, 0.5601037604298112, 0.0818714405050921)]
    [InlineData(0.4, 2.5, 0.8805261050857099, 0.6941646175176287)]
    [InlineData(1, 0.5, 0.3934693402873665, 0.1065306597126334)]
    [InlineData(2, 0.01, 0.00019735322710959184, 1.3200796457104858e-06)]
    [InlineData(2, 1, 0.5939941502901616, 0.54134113294645)]
    [InlineData(3.7, 0.5, 0.1555418225508205, 0.07943410022279337)]
    [InlineData(3.7, 2.5, 0.9873723886162418, 5.566472626090148)]
    [InlineData(40, 0.5, 5.320202511246237e-05, 4.6987772883712395e-05)]
    [InlineData(40, 1, 0.5210288610610552, 2.5178815769436866)]
    [InlineData(300, 1, 0.5076777888862635, 6.90796384475621)]
    [InlineData(300, 2.5, 1.0, 450.0)]
    public void Integrals_KnownTimes_Match(double k, double share, double cumulative, double integrated)
    {
        const double Theta = 3e-5, Delay = 1e-4;
        GammaEmission pulse = Pulse(k, Theta) with { Delay = new(Delay) };
        // a time of 1e-4 s is rounded to 1e-20 s: 1e-15 of theta
        Assert.Equal(cumulative, pulse.CumulativeAt(Delay + share * k * Theta), 1e-12 * cumulative);
        Assert.Equal(integrated, pulse.IntegratedCumulativeAt(Delay + share * k * Theta) / Theta, 1e-13 * Math.Max(1, share * k));
    }

    [SkippableFact]
    public void CumulativeAt_ManyTimes_IsThatOfPython()
    {
        (double K, double T)[] places = [.. new[] { 0.25, 1.5, 17 }.SelectMany(k => Enumerable.Range(1, 60).Select(j => (k, 0.05 * j * (k + 1))))];
        string list = string.Join(',', places.Select(p => FormattableString.Invariant($"({p.K:R},{p.T:R})")));
        string[] printed = Python.Scipy($"from scipy.stats import gamma\nfor k, t in [{list}]: print(repr(float(gamma.cdf(t, k))))").Split('\n', StringSplitOptions.RemoveEmptyEntries);
        Assert.Equal(places.Length, printed.Length);
        for (int j = 0; j < places.Length; j++) Assert.Equal(double.Parse(printed[j], CultureInfo.InvariantCulture), Pulse(places[j].K, 1).CumulativeAt(places[j].T), 1e-12);
    }

    /// <summary>Integral, mean and support agree with the shares.</summary>
    [Theory]
    [InlineData(0.5)]
    [InlineData(1)]
    [InlineData(6)]
    [InlineData(200)]
    public void IntegratedCumulativeAt_OfTheShares_Follows(double k)
    {
        GammaEmission pulse = Pulse(k, 1);
        double high = pulse.Support.High, sum = 0, at = 0;
        // the sudden rise of a small shape is at the beginning: panels as the cube of their number
        for (int j = 1; j <= 400; j++)
        {
            double to = high * Math.Pow(j / 400.0, 3);
            sum += GaussLegendreRule.Integrate(pulse.CumulativeAt, at, to, 8);
            at = to;
            Assert.Equal(sum, pulse.IntegratedCumulativeAt(at), 1e-10 * Math.Max(1, at));
        }
        Assert.Equal(1, pulse.CumulativeAt(high), 1e-14);
        Assert.Equal(pulse.MeanTime, high - pulse.IntegratedCumulativeAt(high), 1e-12 * high);
        Assert.Equal((0.0, 0.0), (pulse.CumulativeAt(-1), pulse.IntegratedCumulativeAt(0)));
    }

    /// <summary>Shape 1 is the exponential pulse, filtered or not; the table of the filter states errors below 1e-6.</summary>
    [Theory]
    [InlineData(0.01)]
    [InlineData(0.7)]
    [InlineData(30)]
    public void Of_ShapeOne_IsTheExponential(double timeConstant)
    {
        var exponential = new ExponentialEmission { Tail = new(1), Delay = new(0.3) };
        GammaEmission gamma = Pulse(1, 1) with { Delay = new(0.3) };
        EmissionProfile slow = FilteredEmission.Of(exponential, timeConstant), same = FilteredEmission.Of(gamma, timeConstant);
        for (double t = 0; t < 60; t += 0.037)
        {
            Assert.Equal(exponential.CumulativeAt(t), gamma.CumulativeAt(t), 1e-13);
            Assert.Equal(slow.CumulativeAt(t), same.CumulativeAt(t), 1e-6);
            Assert.Equal(slow.IntegratedCumulativeAt(t), same.IntegratedCumulativeAt(t), 1e-6);
        }
    }

    /// <remarks>Where the filter is slower than the fall: G = P(k, t/theta) - e^(-t/tau) (1 - theta/tau)^-k P(k, t (1/theta - 1/tau)), by
    /// completing the exponent of the convolution.</remarks>
    [Theory]
    [InlineData(1.2, 1.5)]
    [InlineData(4, 1.1)]
    [InlineData(25, 8)]
    [InlineData(200, 300)]
    public void Of_SlowFilter_IsTheClosedForm(double k, double timeConstant)
    {
        GammaEmission pulse = Pulse(k, 1), within = Pulse(k, 1 / (1 - 1 / timeConstant));
        EmissionProfile filtered = FilteredEmission.Of(pulse, timeConstant);
        double worst = 0;
        for (double t = 0.01; t < pulse.Support.High; t += 0.0137 * Math.Sqrt(k))
            worst = Math.Max(worst, Math.Abs(filtered.CumulativeAt(t) - (pulse.CumulativeAt(t) - Math.Exp(-t / timeConstant) * Math.Pow(1 - 1 / timeConstant, -k) * within.CumulativeAt(t))));
        Assert.InRange(worst, 0, 1e-6);
    }

    static GammaEmission Pulse(double shape, double scale) => new() { Shape = new(shape), Scale = new(scale) };
}
