using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>A laser that moves against its own reading while it is scanned; noiseless runs.</summary>
public class AxisDriftTests
{
    const double Drift = 4e6;
    static readonly SpectralLine[] Lines = [new(-9e6, 0.6), new(14e6, 0.4)];
    static readonly double[] Once = MadeUpScan.Steps(80e6, 340e6, 40), Half = MadeUpScan.Steps(60e6, 270e6, 30);
    static readonly double[] UpDown = [.. Half, .. Half.Reverse()];

    static readonly AnalysisSettings Settings = new()
    {
        Reduction = new ReductionSettings(), Background = "steady", Comparison = new ComparisonSettings(),
        Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 60, VelocityTo = 220, VelocityStep = 4, Replicas = 10, Estimator = "shape" },
    };

    /// <remarks>A speed v is read as v' with v' + d order(v') = v, d the drift over cos(theta)/lambda and the order even over the readings: v' = (v + b)/(1 + e).
    /// Molecules are counted as their signal times speed, and so as v'/v. Fitted by the family that the beam is of: unfolding is out by 0.1 to 0.3 m/s
    /// in noiseless scans, and not by the same for both.</remarks>
    [Fact]
    public void Fit_OneWay_DriftMovesTheMeanAndIsUndoneWhereItIsStated()
    {
        BinnedRun run = Made(Drift, Once);
        const double PerSpeed = 1.16627e6, Span = 260e6, Middle = 210e6;
        double e = Drift / Span, b = e * Middle / PerSpeed;
        double Read(double v) => (v + b) / (1 + e);
        double[] speeds = [.. Enumerable.Range(60, 160).Select(v => (double)v)];
        double expected = speeds.Sum(v => Beam(v) * Read(v) / v * Read(v)) / speeds.Sum(v => Beam(v) * Read(v) / v) - speeds.Sum(v => Beam(v) * v) / speeds.Sum(Beam);
        SpectrumOutcome plain = Fit(run, 0), stated = Fit(run, Drift, Drift);
        Assert.InRange(expected, 0.5, 1);
        // of moments, where the fit is by likelihood and also sees lines 1.5 % too narrow: 5 % of the shift
        Assert.Equal(expected, plain.Mean.Value - stated.Mean.Value, 0.05 * expected);
        Assert.Equal(Fit(Made(0, Once), 0).Mean.Value, stated.Mean.Value, 0.02);
        Assert.Equal(-expected, stated.Mean.Budget.Single(b => b.Cause == "axis drift").Shift, 0.1 * expected);
        Assert.Contains(plain.Remarks, r => r.Contains("correlate by 1.00", StringComparison.Ordinal) && r.Contains("no axis_drift is stated", StringComparison.Ordinal));
        Assert.Contains(stated.Remarks, r => r.Contains("stands in the budget", StringComparison.Ordinal));
        Assert.DoesNotContain(plain.Remarks, r => r.Contains("up and down", StringComparison.Ordinal));
    }

    [Theory]
    [InlineData(4e6)]
    [InlineData(-2e6)]
    public void Fit_UpAndDownApart_MeanStaysAndTheHalvesTellTheDrift(double drift)
    {
        SpectrumOutcome found = Fit(Made(drift, UpDown), 0, 1e6), none = Fit(Made(0, UpDown), 0);
        Assert.Equal(none.Mean.Value, found.Mean.Value, 0.1);
        Assert.InRange(Math.Abs(found.Mean.Budget.Single(b => b.Cause == "axis drift").Shift), 0, 0.03);
        Assert.Contains(found.Remarks, r => r.Contains("averaged out to first order", StringComparison.Ordinal));
        Assert.Equal(drift, 1e6 * Told(found), 0.05 * Math.Abs(drift));
        Assert.Equal(0, Told(none), 0.02);
        // stated, nothing is left
        Assert.Equal(0, Told(Fit(Made(drift, UpDown), drift)), 0.02);
    }

    [Fact]
    public void Fit_AcrossTheBeam_ZeroIsThatOfTheMiddleOfTheRun()
    {
        Setup across = MadeUpScan.Angled(new SpectralLine(0, 1));
        across = across with { Probe = across.Probe with { Angle = new(Math.PI / 2) } };
        Setup drifting = across with { Probe = across.Probe with { AxisDrift = new(Drift, Drift) } };
        double[] readings = MadeUpScan.Steps(-20e6, 40e6, 31);
        BinnedRun run = new MadeUpScan { Nature = drifting, Readings = readings, Order = MadeUpScan.Steps(-0.5, 0.5, 31) }.Make();
        Quantity Zero(Setup setup) => RunAnalysis.Fit(run, TransverseFitter.Mode, setup, Settings).Single().Others.Single(o => o.Name == TransverseFitter.FrequencyZero).Quantity;
        // f' + 4 MHz (f' - 10 MHz)/60 MHz = 0: 0.625 MHz
        Assert.Equal(0.625e6, Zero(across).Value, 1e4);
        Assert.Equal(0, Zero(drifting).Value, 5e3);
        Assert.Equal(-0.625e6, Zero(drifting).Budget.Single(b => b.Cause == "axis drift").Shift, 8e4);
    }

    /// <summary>Drift that the remark reads out of the halves, MHz.</summary>
    static double Told(SpectrumOutcome found)
    {
        string remark = found.Remarks.Single(r => r.Contains("up and down differ", StringComparison.Ordinal));
        const string Before = "drift of the laser by ";
        return double.Parse(remark[(remark.IndexOf(Before, StringComparison.Ordinal) + Before.Length)..].Split(' ')[0], System.Globalization.CultureInfo.InvariantCulture);
    }

    static Setup Setup(double drift, double sigma = 0)
    {
        Setup setup = MadeUpScan.Angled(Lines);
        return setup with { Probe = setup.Probe with { AxisDrift = new(drift, sigma) } };
    }

    /// <summary>Mean 140 m/s, spread 15 m/s.</summary>
    static double Beam(double v) => v * v * v * Math.Exp(-Math.Pow((v - 135) / 21.6, 2));

    static BinnedRun Made(double drift, double[] readings) =>
        new MadeUpScan { Nature = Setup(drift), Beam = Beam, Readings = readings, Order = MadeUpScan.Steps(-0.5, 0.5, readings.Length) }.Make();

    static SpectrumOutcome Fit(BinnedRun run, double drift, double sigma = 0) => RunAnalysis.Fit(run, "doppler", Setup(drift, sigma), Settings).Single();
}
