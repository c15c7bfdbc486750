using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>A magnetic field at the probe: what it does to lines, to velocities and to budgets.</summary>
public class ResidualFieldTests
{
    const double Gauss = 1e-4;
    static readonly SpectralLine[] Lines = [new(-9e6, 0.6) { FieldFactor = 1 }, new(14e6, 0.4) { FieldFactor = 1 }];

    static Setup With(Setup setup, double field, double sigma = 0) => setup with { Probe = setup.Probe with { Field = new(field, sigma) } };

    /// <remarks>mu_B/h = 1.39962 MHz/G (CODATA 2022, 13.99624 GHz/T).</remarks>
    [Theory]
    [InlineData(1.0, 1.39962e6)]
    [InlineData(-0.5, -0.69981e6)]
    [InlineData(null, 0)]
    public void Lines_OneGauss_MoveByTheMagneton(double? factor, double shift)
    {
        Setup setup = With(MadeUpScan.Angled(new SpectralLine(5e6, 1) { FieldFactor = factor }), Gauss);
        Assert.Equal(5e6 + shift, setup.Lines.Single().OffsetHz, 10.0);
        Assert.Same(setup.Species.Lines, With(setup, 0).Lines);
    }

    [Fact]
    public void Lines_MixedStates_AreSplitEvenly()
    {
        Setup setup = With(MadeUpScan.Angled(new SpectralLine(5e6, 3) { FieldFactor = 1, Mixed = true }), -2 * Gauss);
        Assert.Equal([2.20e6, 7.80e6], setup.Lines.Select(l => Math.Round(l.OffsetHz / 1e4) * 1e4).Order());
        Assert.Equal([1.5, 1.5], setup.Lines.Select(l => l.Weight));
    }

    /// <summary>A run recorded in 1 G and analysed without field.</summary>
    /// <remarks>1.39962 MHz over cos 45 deg/606.3 nm = 1.16627 MHz per m/s: 1.2001 m/s; lines that stand higher look like faster molecules.</remarks>
    [Fact]
    public void Fit_FieldNotStated_MovesTheMeanVelocity()
    {
        Setup plain = MadeUpScan.Angled(Lines);
        BinnedRun inField = Made(With(plain, Gauss)), without = Made(plain);
        double zero = Fit(without, plain).Mean.Value;
        Assert.Equal(1.2001, Fit(inField, plain).Mean.Value - zero, 0.02);
        // stated, it is undone; uncertain, it stands in the budget with its sign
        SpectrumOutcome stated = Fit(inField, With(plain, Gauss, Gauss));
        Assert.Equal(zero, stated.Mean.Value, 0.02);
        Assert.Equal(-1.2001, stated.Mean.Budget.Single(b => b.Cause == "residual field").Shift, 0.03);
    }

    [Fact]
    public void Fit_MixedStates_WidenRatherThanMove()
    {
        Setup plain = MadeUpScan.Angled([.. Lines.Select(l => l with { Mixed = true })]);
        SpectrumOutcome without = Fit(Made(plain), plain), inField = Fit(Made(With(plain, 8 * Gauss)), plain);
        // 11.2 MHz to both sides are 9.60 m/s. Light spent is even in speed, a molecule counts as 1/v: the mean of molecules moves by 9.60^2/140 = 0.66 m/s
        Assert.Equal(without.Mean.Value + 0.66, inField.Mean.Value, 0.1);
        // in quadrature with 15 m/s: 17.8 m/s
        Assert.Equal(17.8, SpectrumMoments.Of(inField.Spectra[0].Grid, inField.Spectra[0].Molecules).Spread, 0.6);
    }

    /// <summary>Arrival times: a laser on the line sees less light scattered where the field moves the line away.</summary>
    [Fact]
    public void CountsAt_FieldAtTheProbe_CountsInEveryMode()
    {
        Setup across = MadeUpScan.Angled(new SpectralLine(0, 1) { FieldFactor = 1 });
        across = across with { Probe = across.Probe with { Angle = new(Math.PI / 2) } };
        double ratio = new DetectionYield(With(across, 3 * Gauss)).CountsAt(140) / new DetectionYield(across).CountsAt(140);
        Assert.Equal(1 / (1 + Math.Pow(2 * 3 * 1.39962 / 8.3, 2)), ratio, 1e-5);
    }

    static BinnedRun Made(Setup nature) => new MadeUpScan { Nature = nature, Readings = MadeUpScan.Steps(60e6, 270e6, 43) }.Make();

    static SpectrumOutcome Fit(BinnedRun run, Setup setup) => RunAnalysis.Fit(run, "doppler", setup, Settings).Single();

    static readonly AnalysisSettings Settings = new()
    {
        Reduction = new ReductionSettings(), Background = "steady", Comparison = new ComparisonSettings(),
        Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 60, VelocityTo = 220, VelocityStep = 4, Replicas = 20 },
    };
}
