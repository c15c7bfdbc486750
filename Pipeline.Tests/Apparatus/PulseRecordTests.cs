using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Tests.Apparatus;

public class PulseRecordTests
{
    /// <summary>A triangle from 0 to 4 with its peak of 1 at 1, and a baseline of 0.3 before it.</summary>
    static PulseRecord Triangle(Func<int, double>? noise = null, double until = 6, double height = 1)
    {
        double[] times = [.. Enumerable.Range(0, (int)Math.Round((until + 3) / 0.02) + 1).Select(i => -3 + 0.02 * i)];
        return new PulseRecord("pulse.csv", times, [.. times.Select((t, i) => 0.3 + height * Math.Max(0, t < 0 ? 0 : t < 1 ? t : (4 - t) / 3) + (noise?.Invoke(i) ?? 0))]);
    }

    /// <remarks>Triangle with corners a, b, c: mean (a + b + c)/3, variance (a^2 + b^2 + c^2 - ab - ac - bc)/18. Times that are rounded put a
    /// corner off by 1e-15.</remarks>
    [Fact]
    public void ToEmission_Noiseless_IsTheTriangle()
    {
        TemplateEmission pulse = Triangle().ToEmission(-0.01);
        Assert.Equal(5.0 / 3, pulse.MeanTime, 1e-12);
        Assert.Equal(Math.Sqrt(13.0 / 18), pulse.Width, 1e-12);
        Assert.Equal((0.0, 0.0), (Math.Round(pulse.Delay.Sigma, 12), Math.Round(pulse.Stretch.Sigma, 12)));
        Assert.Equal(0.25, pulse.CumulativeAt(1), 1e-12);
        Assert.Equal(1, pulse.CumulativeAt(5), 1e-12);
    }

    /// <summary>Mean time and width scatter as their stated errors say: 300 records, whose scatter is known to 4 %; a correlated noise too, of
    /// which the records know the correlation to a tenth.</summary>
    [Theory]
    [InlineData(0, 0.85, 1.15)]
    [InlineData(0.7, 0.8, 1.2)]
    public void ToEmission_ManyNoisyRecords_ScatterAsStated(double correlation, double low, double high)
    {
        var random = new Random(20261123);
        double Normal() => MathNet.Numerics.Distributions.Normal.Sample(random, 0, 0.02);
        TemplateEmission[] pulses = [.. Enumerable.Range(0, 300).Select(_ =>
        {
            double last = 0;
            return Triangle(_ => last = correlation * last + Math.Sqrt(1 - correlation * correlation) * Normal()).ToEmission(0);
        })];
        double Ratio(Func<TemplateEmission, double> of, Func<TemplateEmission, double> stated)
        {
            double[] values = [.. pulses.Select(of)];
            double mean = values.Average();
            return Math.Sqrt(values.Sum(v => (v - mean) * (v - mean)) / (values.Length - 1) / pulses.Average(p => stated(p) * stated(p)));
        }
        Assert.InRange(Ratio(p => p.MeanTime, p => p.Delay.Sigma), low, high);
        Assert.InRange(Ratio(p => p.Width / Math.Sqrt(13.0 / 18), p => p.Stretch.Sigma), low, high);
        // negative samples are kept: the mean is not pulled towards the middle of the record, at 3
        Assert.Equal(5.0 / 3, pulses.Average(p => p.MeanTime), 4 * pulses[0].Delay.Sigma / Math.Sqrt(300));
        Assert.Contains(pulses, p => p.Shape.Shares.ToArray().Min() < 0 || p.Shape.Shares.ToArray().Max() > 1);
    }

    /// <summary>The last fiftieth of these records is three samples: on average at (4 - 3.92)/3 = 2.7 % of the peak where the record ends at 3.94,
    /// and at 1.3 % where it ends at 3.98.</summary>
    [Fact]
    public void ToEmission_RecordCut_IsRefusedAboveTwoPercent()
    {
        Assert.Contains("ends at 2.7 % of the peak", FaultOf(Triangle(until: 3.94), 0).Found, StringComparison.Ordinal);
        Assert.Contains("record for longer", FaultOf(Triangle(until: 3.94), 0).Remedy, StringComparison.Ordinal);
        Assert.InRange(Triangle(until: 3.98).ToEmission(0).MeanTime, 1.6, 5.0 / 3);
    }

    [Fact]
    public void ToEmission_NoSignal_IsRefused()
    {
        var random = new Random(7);
        Fault empty = FaultOf(Triangle(_ => MathNet.Numerics.Distributions.Normal.Sample(random, 0, 0.02), height: 0), 0);
        Assert.Contains("no signal above the baseline", empty.Found, StringComparison.Ordinal);
        Assert.Contains("no signal above the baseline", FaultOf(Triangle(height: -1), 0).Found, StringComparison.Ordinal);
        Assert.Equal("pulse.csv", empty.Where);
    }

    /// <summary>A baseline that is d too low from 4.5 to 6 takes 1.49 d off the triangle's area of 2 (a sample of the step is a slope), so that
    /// the share before it is 2/(2 - 1.49 d): 1.02 at d = 0.0263.</summary>
    [Theory]
    [InlineData(0.0, true)]
    [InlineData(0.0262, true)]
    [InlineData(0.0265, false)]
    public void ToEmission_DriftingBaseline_IsRefusedAboveTwoPercent(double drift, bool good)
    {
        PulseRecord triangle = Triangle();
        PulseRecord record = triangle with { Signal = [.. triangle.Signal.Select((s, i) => triangle.Times[i] > 4.5 ? s - drift : s)] };
        if (good) Assert.InRange(record.ToEmission(0).CumulativeAt(4.4), 0.999, 1.02);
        else Assert.Contains("share of molecules", FaultOf(record, 0).Found, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(-2.85, true)]
    [InlineData(-2.87, false)]
    [InlineData(7, false)]
    public void ToEmission_ShortBaseline_IsRefused(double until, bool good)
    {
        if (good) Assert.Equal(5.0 / 3, Triangle().ToEmission(until).MeanTime, 1e-9);
        else Assert.Contains("samples before baseline_until", FaultOf(Triangle(), until).Found, StringComparison.Ordinal);
    }

    /// <remarks>Mean of d/v with weight p (crossings) and p/v (density), p normal: <c>d/u (1 + r^2 + 3 r^4 ...)</c> and
    /// <c>d/u (1 + 2 r^2 + 10 r^4 ...)</c>, by expanding 1/v and 1/v^2; here by a sum over the distribution.</remarks>
    [Theory]
    [InlineData(TemplateWeighting.Crossings, 5)]
    [InlineData(TemplateWeighting.Density, 14)]
    public void Lag_SpreadOfSpeeds_IsTheMeanFlight(TemplateWeighting weighting, double fourth)
    {
        const double D = 0.05, U = 140, R = 0.1;
        (double weight, double late, double square) = (0, 0, 0);
        for (double z = -6; z < 6; z += 0.01)
        {
            double v = U * (1 + R * z), w = Math.Exp(-0.5 * z * z) / (weighting == TemplateWeighting.Density ? v : 1);
            (weight, late, square) = (weight + w, late + w * D / v, square + w * D / v * D / v);
        }
        TemplateEmission pulse = Triangle().ToEmission(0) with { Weighting = weighting, Distance = new(D), MeanSpeed = new(U), SpeedSpread = new(R * U) };
        double mean = late / weight;
        Assert.Equal(mean, pulse.Lag, D / U * fourth * R * R * R * R);
        Assert.Equal(Math.Sqrt(square / weight - mean * mean), pulse.Smear, 0.1 * pulse.Smear);
        Assert.Equal(Triangle().ToEmission(0).MeanTime - pulse.Lag, pulse.MeanTime, 1e-12);
        Assert.Null(pulse.Remark);
    }

    /// <summary>5 m at 140 ± 10 m/s: a smear of 2.55 ms; a quarter of a rms width of 10.2 ms.</summary>
    [Theory]
    [InlineData(0.0121, null)]
    [InlineData(0.0119, "different speeds smear it by 2.55E+03 us")]
    public void Remark_SmearNotSmall_IsMade(double stretch, string? says)
    {
        TemplateEmission pulse = Triangle().ToEmission(0) with { Distance = new(5), MeanSpeed = new(140), SpeedSpread = new(10), Stretch = new(stretch) };
        if (says is null) Assert.Null(pulse.Remark);
        else Assert.Contains(says, pulse.Remark, StringComparison.Ordinal);
    }

    /// <summary>Every nuisance moves what it names, by one of its standard uncertainties.</summary>
    [Fact]
    public void Nuisances_Template_MoveThePulse()
    {
        TemplateEmission pulse = Triangle().ToEmission(0) with
        {
            Delay = new(0.1, 0.02), Distance = new(1, 0.1), MeanSpeed = new(10, 1), SpeedSpread = new(2, 0.5), Stretch = new(1, 0.03), Weighting = TemplateWeighting.Density,
        };
        Setup setup = Support.TestSetups.OneMetre(pulse, 1, null);
        Dictionary<string, TemplateEmission> moved = Nuisances.Of(setup).ToDictionary(n => n.Name, n => (TemplateEmission)n.Shift(setup, 1).Emission, StringComparer.Ordinal);
        Assert.Equal(["emission delay", "emission stretch", "template distance", "template mean speed", "template speed spread"], moved.Keys.Order(StringComparer.Ordinal));
        Assert.Equal(pulse.MeanTime + 0.02, moved["emission delay"].MeanTime, 1e-12);
        Assert.Equal(1.03 * pulse.Width, moved["emission stretch"].Width, 1e-12);
        Assert.Equal(pulse.MeanTime, moved["emission stretch"].MeanTime, 1e-12);
        Assert.Equal(pulse.MeanTime - 0.1 / 10 * 1.08, moved["template distance"].MeanTime, 1e-12);
        Assert.Equal(pulse.MeanTime + 0.1 * 1.08 - 1.0 / 11 * (1 + 2 * 4.0 / 121), moved["template mean speed"].MeanTime, 1e-12);
        Assert.Equal(pulse.MeanTime - 0.1 * 2 * (0.0625 - 0.04), moved["template speed spread"].MeanTime, 1e-12);
    }

    static Fault FaultOf(PulseRecord record, double until) => Assert.Throws<DataFaultException>(() => record.ToEmission(until)).Fault;
}
