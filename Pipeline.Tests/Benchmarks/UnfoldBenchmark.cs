using System.Text.Json;
using Pipeline.Fitting;
using Pipeline.Tests.Support;
using Xunit.Abstractions;

namespace Pipeline.Tests.Benchmarks;

/// <summary>Unfolding 400 bins into 120 cells with 1,000 replicas, beside a script that solves the same replicas with SciPy.</summary>
/// <remarks>The program's time holds the main fit, the choice of smoothing, and number, mean and spread of every replica; the script is given
/// strength and weights, and its start and reading are not measured.</remarks>
[Collection(BenchmarkOrder.Name)]
public class UnfoldBenchmark(ITestOutputHelper output)
{
    const int Replicas = 1000, Repeats = 5;

    [BenchmarkFact]
    public void Unfold_ThousandReplicas_AgreesWithScript()
    {
        var problem = new UnfoldProblem(Replicas);
        (UnfoldedSpectrum fit, Refitted[] replicas) = problem.Solve();
        Assert.Null(fit.Doubt);
        Refitted[] alone = [.. problem.Replicas.Windows.Select(w => fit.Refit(w, problem.Response))];
        for (int r = 0; r < Replicas; r++) Assert.Equal(alone[r].Molecules, replicas[r].Molecules); // to the last bit, on one thread or many
        Stopwatches own = Stopwatches.Measure("arrivals: fit, smoothing, replicas, moments", () => problem.Solve(), 21, 10);
        Stopwatches main = Stopwatches.Measure("  of this fit and smoothing", () => new UnfoldedEstimator().Fit(problem.Main, problem.Response), 21);
        string folder = Directory.CreateTempSubdirectory("arrivals-benchmark").FullName;
        try
        {
            problem.Write(folder, fit);
            Dictionary<string, double[]> seconds = JsonSerializer.Deserialize<Dictionary<string, double[]>>(Python.Print(["Pipeline.Tests", "Benchmarks", "unfold_replicas.py"], folder, $"{Repeats}"))!;
            foreach (string way in seconds.Keys) Compare(replicas, Path.Combine(folder, way), way);
            foreach (string line in Stopwatches.Table([own, main, .. seconds.Select(s => new Stopwatches($"scipy nnls, {s.Key}: replicas", s.Value))]))
                output.WriteLine(line);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }

    /// <summary>Both are exact methods of the active set for one strictly convex problem: what differs is rounding, 1e-14 where measured.
    /// One weight of 400 changed by 1e-4 makes 6e-7.</summary>
    void Compare(Refitted[] replicas, string path, string way)
    {
        ReadOnlySpan<double> theirs = System.Runtime.InteropServices.MemoryMarshal.Cast<byte, double>(File.ReadAllBytes(path));
        Assert.Equal(Replicas * UnfoldProblem.Cells, theirs.Length);
        double worst = 0;
        for (int r = 0; r < Replicas; r++)
            for (int c = 0; c < UnfoldProblem.Cells; c++)
                worst = Math.Max(worst, Math.Abs(replicas[r].Molecules[c] - theirs[r * UnfoldProblem.Cells + c]) / replicas[r].Molecules.Max());
        output.WriteLine($"{way}: largest difference of a cell {worst:E1} of the replica's largest");
        Assert.InRange(worst, 0, 1e-9);
    }
}
