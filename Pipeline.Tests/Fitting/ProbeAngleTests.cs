using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>An angle that is not the stated one.</summary>
public class ProbeAngleTests
{
    const double HalfDegree = 0.5 * Math.PI / 180;

    static readonly AnalysisSettings Settings = new()
    {
        Reduction = new ReductionSettings(), Background = "steady", Comparison = new ComparisonSettings(),
        Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 60, VelocityTo = 220, VelocityStep = 4, Replicas = 10 },
    };

    static Setup At(double angle, double sigma = 0)
    {
        Setup setup = MadeUpScan.Angled(new SpectralLine(0, 1));
        return setup with { Probe = setup.Probe with { Angle = new(angle, sigma) } };
    }

    /// <remarks>dv/v = tan(theta) dtheta: 0.5 deg at 45 deg moves a velocity by 0.87 % (elementary). Whoever takes the angle too large takes the
    /// projection too small and the molecules too fast.</remarks>
    [Fact]
    public void Fit_HalfADegree_MovesTheMeanByTheTangent()
    {
        BinnedRun run = new MadeUpScan { Nature = At(Math.PI / 4), Readings = MadeUpScan.Steps(60e6, 270e6, 43) }.Make();
        Quantity plain = Mean(run, At(Math.PI / 4, HalfDegree)), larger = Mean(run, At(Math.PI / 4 + HalfDegree));
        // exactly cos(45 deg)/cos(45.5 deg) - 1 = 0.88 %
        Assert.Equal(0.0088, larger.Value / plain.Value - 1, 2e-4);
        Assert.Equal(0.00873, plain.Budget.Single(b => b.Cause == "probe angle").Shift / plain.Value, 2e-4);
    }

    static Quantity Mean(BinnedRun run, Setup setup) => RunAnalysis.Fit(run, "doppler", setup, Settings).Single().Mean;
}
