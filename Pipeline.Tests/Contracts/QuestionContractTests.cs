using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Contracts;

/// <summary>What every question must do, on seeded ensembles of drawn signals and drawn simulations.</summary>
public class QuestionContractTests
{
    static readonly VelocityGrid Grid = new(20, 300, 4);
    static readonly FitSettings Fit = new() { FromSeconds = 1.5e-3, VelocityFrom = 20, VelocityTo = 300, VelocityStep = 4 };

    public static TheoryData<string> All => ["rate", "arrival time", "shape"];

    [Fact]
    public void Concerns_ArrivalTimes_LeavesOutTheQuestionOfScans()
    {
        ComparisonCase drawn = Draw(new MathNet.Numerics.Random.Xoshiro256StarStar(1, threadSafe: false), 1, 1, shots: 2, blocks: 2);
        Assert.Equal(["rate", "arrival time", "shape"], Questions.All.Where(q => q.Concerns(drawn)).Select(q => q.Name));
    }

    static Setup Setup => TestSetups.OneMetre(new InstantEmission { Delay = new(1e-4) }, 20, null);

    [Theory]
    [MemberData(nameof(All))]
    public void Ask_UnderAgreement_PValuesAreUniform(string question)
    {
        IQuestion q = Questions.All.Single(x => x.Name == question);
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(23, threadSafe: false);
        const int Draws = 200;
        double[] p = [.. Enumerable.Range(0, Draws).Select(_ => q.Ask(Draw(random, 1, 1)).PValue).Order()];
        double distance = p.Select((x, k) => Math.Max((k + 1.0) / Draws - x, x - (double)k / Draws)).Max();
        // Kolmogorov: 1.628/sqrt(n) is passed once in a hundred ensembles (NIST/SEMATECH e-Handbook 1.3.5.16)
        Assert.True(distance < 1.628 / Math.Sqrt(Draws), $"{question}: distance {distance}");
    }

    [Theory]
    [InlineData("rate", 0.85, 1)]
    [InlineData("arrival time", 1, 1.02)]
    [InlineData("shape", 1, 1.03)]
    public void Ask_WrongModel_IsSeen(string question, double rate, double stretch)
    {
        IQuestion q = Questions.All.Single(x => x.Name == question);
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(29, threadSafe: false);
        int seen = Enumerable.Range(0, 20).Count(_ => q.Ask(Draw(random, rate, stretch)).PValue < 0.01);
        Assert.True(seen >= 18, $"{seen} of 20");
    }

    [Fact]
    public void Decide_WeakData_IsUndecidedAndSaysWhatWouldDecide()
    {
        Verdict verdict = Judge.Decide([Questions.All[0].Ask(Draw(new MathNet.Numerics.Random.Xoshiro256StarStar(31, threadSafe: false), 1, 1, shots: 1, blocks: 1))], 0.01, "");
        Assert.Equal(Judgement.Undecided, verdict.Judgement);
        Assert.Contains("shots", verdict.Reasons.Single(), StringComparison.Ordinal);
    }

    [Fact]
    public void Case_PredictionOutsideTheWindow_IsAFault()
    {
        var late = new MoleculeList([0.5], [0], [150], [0], [0], [0], [0], [1], MoleculeWeighting.Crossings);
        ComparisonCase drawn = Draw(new MathNet.Numerics.Random.Xoshiro256StarStar(1, threadSafe: false), 1, 1, shots: 2, blocks: 2);
        Assert.True(drawn.Predicted.Sum() > 0);
        var made = new MadeUpRun();
        NetSignal signal = BackgroundModels.Named("steady").Subtract(made.Make(), "off", Setup.Detector);
        var outcome = new SpectrumOutcome { Signal = signal, Flight = "free", Spectra = [], Below = new BelowCapture(24, 0, null), YieldScatter = 0, YieldFreedom = 1 };
        var fault = Assert.Throws<DataFaultException>(() => new ComparisonCase(outcome, new PredictionFold(late, made.Axis, Grid), Setup, Fit, new ComparisonSettings()));
        Assert.Contains("no counts inside the fit window", fault.Fault.Found, StringComparison.Ordinal);
    }

    [Fact]
    public void Decide_NothingAsked_IsUndecidedWithAReason() =>
        Assert.Equal("no prediction", Judge.Decide([], 0.01, "no prediction").Reasons.Single());

    /// <summary>A run drawn from a beam, against a simulation of 4,000 molecules drawn from the same; rate and arrival times of the run
    /// may differ.</summary>
    static ComparisonCase Draw(Random random, double rate, double stretch, int shots = 40, int blocks = 8)
    {
        MoleculeList nature = Simulated(random, 200_000, 600), simulation = Simulated(random, 4000, 600);
        var made = new MadeUpRun();
        double[] molecules = [.. new PredictionFold(nature, made.Axis, Grid).Fold(Setup, Stretch.OfTimes(stretch)).Signal.Select(s => rate * s)];
        BinnedRun run = new MadeUpRun { Molecules = molecules }.Make(shots, blocks, random);
        NetSignal signal = BackgroundModels.Named("steady").Subtract(run, "off", Setup.Detector);
        var outcome = new SpectrumOutcome
        {
            Signal = signal, Flight = "free", Spectra = [], Below = new BelowCapture(24, 0, null), YieldScatter = 0, YieldFreedom = 39,
        };
        return new ComparisonCase(outcome, new PredictionFold(simulation, made.Axis, Grid), Setup, Fit, new ComparisonSettings { RateMatters = 0.05 });
    }

    static MoleculeList Simulated(Random random, int count, double number)
    {
        double[] zeros = new double[count], speeds = new double[count];
        for (int k = 0; k < count; k++)
            do speeds[k] = Normal.Sample(random, 150, 20); while (speeds[k] < 60);
        return new MoleculeList([.. Enumerable.Repeat(1e-4, count)], zeros, speeds, zeros, zeros, zeros, zeros, [.. Enumerable.Repeat(number / count, count)], MoleculeWeighting.Crossings);
    }
}
