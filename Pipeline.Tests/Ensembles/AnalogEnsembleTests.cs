using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Tests.Support;
using SampleDay;
using Xunit.Abstractions;

namespace Pipeline.Tests.Ensembles;

/// <summary>Arrival times on an analog detector, backgrounds from the other kinds of shot.</summary>
public class AnalogEnsembleTests(ITestOutputHelper output)
{
    [Fact]
    public void Fit_AnalogEnsemble_PullsAreNormal()
    {
        LabConfiguration lab = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        var scene = new Scene { DeadTime = 0, Efficiency = 1e-2, ScatterRate = 1e3 };
        Beam beam = Day.Usual with { Emitted = 1500 };
        var plan = new RunPlan { Conditions = ["off"], Signal = 60, NoAblation = 40, ProbeBlocked = 30, Dark = 20, Start = -4e-3, Step = 20e-6, Samples = 2200 };
        Setup setup = MadeShots.Exact(lab.Setup);
        setup = setup with
        {
            Detector = setup.Detector with
            {
                Kind = DetectorKind.Analog, Efficiency = new(scene.Efficiency), DeadTime = default, VoltSecondPerElectron = new(AnalogTraces.VoltSeconds),
                TimeConstant = new(AnalogTraces.TimeConstant), ExcessNoise = new(AnalogTraces.ExcessNoise),
            },
        };
        var settings = new AnalysisSettings
        {
            Background = "templates", Reduction = new ReductionSettings { ShotsPerBlock = 5 }, Comparison = lab.Analysis.Comparison,
            Fit = new FitSettings { FromSeconds = 1.5e-3, VelocityFrom = 22, VelocityTo = 246, VelocityStep = 4, Replicas = 60 },
        };
        Truth truth = Truth.Of(scene, beam, false, setup.CaptureSpeed, 5);
        var table = new PullTable(output, "analog");
        for (int k = 0; k < MadeShots.Runs / 2; k++)
        {
            BinnedRun run = AnalogTraces.Reduce(Simulate.Run(scene, beam, plan, 16_000 + k), plan, k, setup, settings);
            Assert.Empty(run.Cuts);
            table.Add("templates", RunAnalysis.Fit(run, "arrival", setup, settings).Single(), truth);
        }
        table.Check();
    }
}
