using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Benchmarks;

/// <summary>A beam of 9,000 counts over 4,000 of background, in 400 bins and 120 cells, with bootstrap replicas over 40 blocks of shots.</summary>
/// <remarks>The background's common causes are left out: their amplitudes may have any sign, and the solver that is compared knows no such variable.</remarks>
sealed class UnfoldProblem
{
    public const int Bins = 400, Cells = 120;

    /// <summary>Bins before the window, which reach back before the trigger.</summary>
    const int Before = 40;
    const double From = 2e-3;

    public UnfoldProblem(int replicas)
    {
        Setup setup = TestSetups.OneMetre(new ExponentialGaussianEmission { Delay = new(1e-4), Width = new(2e-5), Tail = new(5e-5) }, 20, null);
        var axis = new SignalAxis(From - Before * 80e-6, 80e-6, [.. Enumerable.Range(0, Before + Bins + 1)]);
        var grid = new VelocityGrid(30, 270, 2);
        Response = new ArrivalResponse().Build(setup, "off", axis, grid);
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(5, threadSafe: false);
        BinnedRun run = new MadeUpRun { Axis = axis, Molecules = Response.Fold(Beam(grid, 1000)) }.Make(60, 40, random);
        NetSignal Of(BinnedRun drawn) => BackgroundModels.Named("steady").Subtract(drawn, "off", setup.Detector) with { Causes = [] };
        NetSignal signal = Of(run);
        var settings = new FitSettings { FromSeconds = From, VelocityFrom = grid.From, VelocityTo = grid.To, VelocityStep = grid.Step, Replicas = replicas };
        Main = new FitWindow(signal, From, null);
        Assert.Equal((Bins, Cells), (Main.Count, grid.Cells));
        Replicas = new Replicas(run, signal, Of, settings);
    }

    public ResponseMatrix Response { get; }
    public FitWindow Main { get; }
    public Replicas Replicas { get; }

    /// <summary>What the program does: fit with its choice of smoothing, and every replica warm-started from it.</summary>
    public (UnfoldedSpectrum Fit, Refitted[] Replicas) Solve()
    {
        var fit = (UnfoldedSpectrum)new UnfoldedEstimator().Fit(Main, Response);
        return (fit, Replicas.Map(w => fit.Refit(w, Response)));
    }

    /// <summary>Hands the quadratic problem that all replicas share, and their net counts, to the script.</summary>
    public void Write(string folder, UnfoldedSpectrum fit)
    {
        double[] design = [.. Enumerable.Range(0, Cells).SelectMany(c => Column(c))];
        Write(Path.Combine(folder, "design"), design);
        Write(Path.Combine(folder, "weights"), fit.Weights);
        Write(Path.Combine(folder, "penalty"), Smoothing.Penalty(new Design(Main, Response), fit.Strength));
        Write(Path.Combine(folder, "net"), [.. Replicas.Windows.SelectMany(w => w.Total.Select((t, i) => (t - w.Background[i]) * Main.Exposure[i] / w.Exposure[i]))]);
    }

    /// <summary>[bins] counts for one molecule of a cell in the main data.</summary>
    double[] Column(int cell)
    {
        var column = new double[Bins];
        ReadOnlySpan<double> whole = Response.Column(cell);
        int first = Response.First(cell) - Main.First;
        for (int k = Math.Max(0, -first); k < Math.Min(whole.Length, Bins - first); k++) column[first + k] = whole[k] * Main.Exposure[first + k];
        return column;
    }

    static void Write(string path, double[] values) =>
        File.WriteAllBytes(path, System.Runtime.InteropServices.MemoryMarshal.AsBytes(values.AsSpan()));

    static double[] Beam(VelocityGrid grid, double number)
    {
        double[] flux = [.. Enumerable.Range(0, grid.Cells).Select(grid.Centre).Select(v => v * v * v * Math.Exp(-Math.Pow((v - 140) / 30, 2)))];
        return [.. flux.Select(f => number * f / flux.Sum())];
    }
}
