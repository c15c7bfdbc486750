using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Quantities;
using Pipeline.Reduction;
using Pipeline.Tests.Ensembles;
using Pipeline.Tests.Support;
using SampleDay;

namespace Pipeline.Tests.Fitting;

public class ConditionRatioTests
{
    /// <summary>1 T can take 2 mu_B B = 27.99 GHz a stage (CODATA), less than the 45 GHz that the shipped apparatus states.</summary>
    [Theory]
    [InlineData(1.0, true)]
    [InlineData(1.9, false)]
    public void Fit_MoreEnergyThanTheFieldCanTake_SaysSo(double field, bool said)
    {
        LabConfiguration lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        Setup setup = lab.Setup with { Beamline = lab.Setup.Beamline with { Decelerator = lab.Setup.Beamline.Decelerator! with { PeakField = new Measured(field) } } };
        var settings = lab.Analysis with { Fit = lab.Analysis.Fit with { Replicas = 50, VelocityStep = 10 } };
        var plan = new RunPlan { Conditions = ["off", "on"], Signal = 20, NoAblation = 10, ProbeBlocked = 5, Dark = 5, Step = 40e-6, Samples = 1025 };
        IReadOnlyList<SpectrumOutcome> fits = RunAnalysis.Fit(MadeShots.Reduce(Simulate.Run(new Scene(), Day.Usual, plan, 3), plan, setup, settings), "arrival", setup, settings);
        Assert.Equal(said, fits[1].Remarks.Any(r => r.Contains("at most 28.0 GHz", StringComparison.Ordinal)));
        Assert.Contains(fits[1].Others, o => o.Name == "number over off");
    }
}
