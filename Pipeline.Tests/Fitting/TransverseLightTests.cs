using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Fitting;

/// <summary>A scan across the beam whose laser gets dimmer on the way.</summary>
public class TransverseLightTests
{
    static readonly AnalysisSettings Settings = new()
    {
        Reduction = new ReductionSettings(), Background = "steady", Comparison = new ComparisonSettings(),
        Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 60, VelocityTo = 220, VelocityStep = 4, Replicas = 10 },
    };

    static Setup Across
    {
        get
        {
            Setup setup = MadeUpScan.Angled(new SpectralLine(0, 1));
            return setup with { Probe = setup.Probe with { Angle = new(Math.PI / 2) } };
        }
    }

    [Fact]
    public void Fit_LaserGetsDimmer_ZeroStays()
    {
        double[] readings = MadeUpScan.Steps(-22e6, 30e6, 27);
        double[] light = [.. readings.Select((_, k) => 1.2 - 0.4 * k / 26.0)];
        BinnedRun run = new MadeUpScan { Nature = Across, Readings = readings, Light = light }.Make();
        Assert.Equal(0, Zero(run), 5e3);
        // the same counts, the monitor not read: what the light would do
        BinnedRun unread = run with { Groups = [.. run.Groups.Select(g => g.Point < 0 ? g : g with { BlockProbeMonitor = g.BlockShots })] };
        Assert.InRange(Zero(unread), -2e6, -0.1e6);
    }

    static double Zero(BinnedRun run) =>
        RunAnalysis.Fit(run, TransverseFitter.Mode, Across, Settings).Single().Others.Single(o => o.Name == TransverseFitter.FrequencyZero).Quantity.Value;
}
