using System.Diagnostics;
using Pipeline.Apparatus;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Tests.LabFiles;
using SampleDay;

namespace Pipeline.Tests.Ingest;

/// <summary>Damaged input gets a clear error, in bounded time, and never numbers.</summary>
public sealed class BrokenFileTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-broken").FullName;
    const string Table = "shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n0,signal,off,1,1,0\n1,dark,off,0,0,0\n";
    const string Samples = "time (us),shot_0,shot_1\n0,1,0\n10,2,0\n20,0,1\n";

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void Open_WholeCsv_IsRead()
    {
        using IShotSource source = OpenCsv(Samples, Table);
        Assert.Equal([1, 2, 0, 0, 0, 1], source.ReadBlocks().Single().Codes!);
    }

    /// <summary>Each row: samples, shot table, then where and what the fault must name.</summary>
    [Theory]
    [InlineData("", Table, "run.csv", "an empty file")]
    [InlineData("# only a comment\n", Table, "run.csv", "no header line")]
    [InlineData("time (us),shot_0\n0,1\n10,2\n", Table, "run.csv", "no column \"shot_1\"")]
    [InlineData("time (us),shot_0,shot_1,shot_2\n0,1,0,0\n10,2,0,0\n", Table, "run.csv", "3 columns beside the time")]
    [InlineData("time (us),shot_0,shot_0\n0,1,0\n10,2,0\n", Table, "run.csv", "two columns \"shot_0\"")]
    [InlineData("time (ms),shot_0,shot_1\n0,1,0\n10,2,0\n", Table, "run.csv", "no column \"time (us)\"")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,2\n", Table, "run.csv, line 3", "2 fields")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,2,0,9\n", Table, "run.csv, line 3", "4 fields")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,x,0\n20,0,0\n", Table, "run.csv, line 3, column \"shot_0\"", "\"x\"")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,,0\n20,0,0\n", Table, "run.csv, line 3, column \"shot_0\"", "an empty field")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,NaN,0\n20,0,0\n", Table, "run.csv, line 3, column \"shot_0\"", "NaN")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,1e999,0\n20,0,0\n", Table, "run.csv, line 3, column \"shot_0\"", "1e999")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n0,2,0\n", Table, "run.csv, line 3", "after 0")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,2,0\n35,2,0\n", Table, "sample 1", "time 10")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n", Table, "run.csv", "1 rows")]
    [InlineData("time (us);shot_0;shot_1\n0;1;0\n10;2;0\n", Table, "run.csv", "no column")]
    [InlineData(Samples, "", "run_shots.csv", "an empty file")]
    [InlineData(Samples, null, "run_shots.csv", "cannot be opened")]
    [InlineData(Samples, "shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n", "run_shots.csv", "no shots")]
    [InlineData(Samples, "shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n0,signal,off,1,1,0\n0,dark,off,0,0,0\n", "run_shots.csv", "shot number 0 twice")]
    [InlineData(Samples, "shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n0,signal,off,1,1,0\n1,night,off,0,0,0\n", "shot 1", "kind \"night\"")]
    [InlineData(Samples, "shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n0,signal,off,1,1,0\n1,dark,off,high,0,0\n", "run_shots.csv, line 3", "\"high\"")]
    [InlineData(Samples, "shot,kind,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n0,signal,1,1,0\n1,dark,0,0,0\n", "run_shots.csv", "no column \"decelerator\"")]
    [InlineData("time (us),\"shot_0\nx\",shot_1\n0,1,0\n10,2,0\n", Table, "run.csv", "")]
    public void Open_BrokenCsv_NamesPlaceAndFault(string samples, string? table, string where, string found)
    {
        Fault fault = Assert.Throws<DataFaultException>(() =>
        {
            using IShotSource source = OpenCsv(samples, table);
            return source.ReadBlocks().Count();
        }).Fault;
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(found, fault.Found, StringComparison.Ordinal);
        Assert.NotEmpty(fault.Expected);
        Assert.NotEmpty(fault.Remedy);
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(0.02)]
    [InlineData(0.3)]
    [InlineData(0.9)]
    [InlineData(0.999)]
    public void Open_TruncatedHdf5_IsRefused(double share)
    {
        string path = WriteHdf5();
        byte[] whole = File.ReadAllBytes(path);
        File.WriteAllBytes(path, whole[..(int)(share * whole.Length)]);
        Refused(path);
    }

    [Fact]
    public void Open_NoHdf5OrMissingOrFolder_IsRefused()
    {
        string path = Path.Combine(_folder, "text.h5");
        File.WriteAllText(path, new string('x', 5000));
        Assert.Contains("no HDF5 signature", Refused(path).Found, StringComparison.Ordinal);
        Assert.Contains("cannot be opened", Refused(Path.Combine(_folder, "missing.h5")).Found, StringComparison.Ordinal);
        Directory.CreateDirectory(Path.Combine(_folder, "folder.h5"));
        Refused(Path.Combine(_folder, "folder.h5"));
    }

    [Fact]
    public void Open_MissingDatasetOrAttribute_NamesIt()
    {
        string path = WriteHdf5();
        var layout = (Hdf5MatrixLayout)LabFile.Matrix;
        Assert.Contains("absent", Assert.Throws<DataFaultException>(() => ShotFiles.Open(path, layout with { Samples = "absent" }, DetectorKind.Counting)).Fault.Where, StringComparison.Ordinal);
        Assert.Contains("no such attribute", Assert.Throws<DataFaultException>(() => ShotFiles.Open(path, layout with { Step = new(null, "absent") }, DetectorKind.Counting)).Fault.Found, StringComparison.Ordinal);
        Assert.Contains("dimensions", Assert.Throws<DataFaultException>(() => ShotFiles.Open(path, layout with { Samples = "shots/shot" }, DetectorKind.Counting)).Fault.Found, StringComparison.Ordinal);
        Assert.Contains("a group", Assert.Throws<DataFaultException>(() => ShotFiles.Open(path, layout with { Samples = "shots" }, DetectorKind.Counting)).Fault.Found, StringComparison.Ordinal);
    }

    /// <summary>Every byte of the file's skeleton turned over: either the same numbers or a fault, never other numbers of the wrong shape,
    /// a crash or a hang.</summary>
    [Fact]
    public void Open_CorruptedHdf5_EndsInTime()
    {
        string path = WriteHdf5();
        byte[] whole = File.ReadAllBytes(path);
        var clock = Stopwatch.StartNew();
        var random = new Random(1);
        int refused = 0;
        for (int trial = 0; trial < 150; trial++)
        {
            byte[] bad = [.. whole];
            for (int k = 0; k < 4; k++) bad[random.Next(bad.Length)] ^= (byte)(1 + random.Next(255));
            File.WriteAllBytes(path, bad);
            try
            {
                using IShotSource source = ShotFiles.Open(path, LabFile.Matrix, DetectorKind.Counting);
                foreach (var block in source.ReadBlocks()) Assert.Equal(source.Shape.Samples, block.Samples);
            }
            catch (DataFaultException) { refused++; }
        }
        Assert.True(refused > 20, $"{refused} of 150 refused");
        Assert.True(clock.Elapsed < TimeSpan.FromSeconds(60), $"{clock.Elapsed}");
    }

    [Theory]
    [InlineData("t_s,z_m,vz_m_per_s,x_m,y_m,vx_m_per_s,vy_m_per_s\n0,0,1,0,0,0,0\n", "no column \"weight\"")]
    [InlineData("t_s,z_m,vz_m_per_s,x_m,y_m,vx_m_per_s,vy_m_per_s,weight\n", "no molecules")]
    [InlineData("t_s,z_m,vz_m_per_s,x_m,y_m,vx_m_per_s,vy_m_per_s,weight\n0,0,0,0,0,0,0,1\n", "0")]
    [InlineData("t_s,z_m,vz_m_per_s,x_m,y_m,vx_m_per_s,vy_m_per_s,weight\n0,0,100,0,0,0,0,-1\n", "-1")]
    [InlineData("t_s,z_m,vz_m_per_s,x_m,y_m,vx_m_per_s,vy_m_per_s,weight\n0,0,inf,0,0,0,0,1\n", "inf")]
    public void Read_BrokenPrediction_SaysWhat(string text, string found)
    {
        string path = Path.Combine(_folder, "p.csv");
        File.WriteAllText(path, text);
        Assert.Contains(found, Assert.Throws<DataFaultException>(() => MoleculeFiles.Read(path, LabFile.Molecules, MoleculeWeighting.Crossings)).Fault.Found, StringComparison.Ordinal);
    }

    string WriteHdf5()
    {
        var plan = new RunPlan { Conditions = ["off"], Signal = 8, NoAblation = 3, ProbeBlocked = 2, Dark = 2, Samples = 400, Step = 20e-6 };
        string path = Path.Combine(_folder, "run.h5");
        Writers.Hdf5(path, plan, Simulate.Run(new Scene(), Day.Usual, plan, 3));
        return path;
    }

    static Fault Refused(string path) => Assert.Throws<DataFaultException>(() =>
    {
        using IShotSource source = ShotFiles.Open(path, LabFile.Matrix, DetectorKind.Counting);
        return source.ReadBlocks().Count();
    }).Fault;

    IShotSource OpenCsv(string samples, string? table)
    {
        string path = Path.Combine(_folder, "run.csv");
        File.WriteAllText(path, samples);
        if (table is not null) File.WriteAllText(Path.Combine(_folder, "run_shots.csv"), table);
        return ShotFiles.Open(path, LabFile.Wide, DetectorKind.Counting);
    }
}
