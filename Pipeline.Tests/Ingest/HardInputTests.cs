using System.Diagnostics;
using System.Text;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Ingest;
using Pipeline.Tests.LabFiles;
using Pipeline.Tests.Support;
using SampleDay;

namespace Pipeline.Tests.Ingest;

/// <summary>Input that asks for much time, much memory, or rights that are not there: a fault within bounds, or the right answer.</summary>
public sealed class HardInputTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-hard").FullName;
    const string Table = "shot,kind,decelerator,probe_monitor_v,ablation_monitor_v,detuning_readback_hz\n0,signal,off,1,1,0\n1,dark,off,0,0,0\n";

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Theory]
    [InlineData("time (us),shot_0;shot_1\n0,1;0\n10,2;0\n", "run.csv", "no column")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10;2;0\n20,1,1\n", "run.csv, line 3", "1 fields")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n\"10\n11\",2,0\n", "run.csv, line 3", "1 fields")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,\"2,0\n20,1,1\n", "run.csv, line 3", "2 fields")]
    [InlineData("time (us),time (us),shot_0,shot_1\n0,0,1,0\n10,10,2,0\n", "run.csv", "two columns \"time (us)\"")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n20,2,0\n10,2,0\n", "run.csv, line 4", "time 10 after 20")]
    [InlineData("time (us),shot_0,shot_1\n0,1,0\n10,-inf,0\n20,2,0\n", "line 3, column \"shot_0\"", "-inf")]
    [InlineData("time (us),shot_0,shot_1\n0,1 000,0\n10,2,0\n", "line 2, column \"shot_0\"", "1 000")]
    [InlineData("time (us),shot_0,shot_1\n0,0x1F,0\n10,2,0\n", "line 2, column \"shot_0\"", "0x1F")]
    [InlineData("time (us),shot_0,shot_1\n0,\u0661,0\n10,2,0\n", "line 2, column \"shot_0\"", "\u0661")]
    public void Open_OddCsv_NamesPlaceAndFault(string samples, string where, string found)
    {
        Fault fault = Bounded(() => Open(Csv(samples)));
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(found, fault.Found, StringComparison.Ordinal);
    }

    /// <summary>A hundred thousand columns: as shots they are read, as a mistake they are named.</summary>
    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void Open_ManyColumns_IsReadOrRefusedInTime(bool whole)
    {
        const int Columns = 100_000;
        var samples = new StringBuilder("time (us)");
        for (int k = 0; k < Columns; k++) samples.Append(",shot_").Append(k);
        for (int row = 0; row < 4; row++)
        {
            samples.Append('\n').Append(10 * row);
            for (int k = 0; k < Columns; k++) samples.Append(',').Append((k + row) % 3);
        }
        var table = new StringBuilder(Table.Split('\n')[0] + "\n");
        for (int k = 0; k < (whole ? Columns : 2); k++) table.Append(k).Append(",signal,off,1,1,0\n");
        string path = Csv(samples.Append('\n').ToString(), table.ToString());
        if (!whole)
        {
            Assert.Contains("100000 columns", Bounded(() => Open(path)).Found, StringComparison.Ordinal);
            return;
        }
        var clock = Stopwatch.StartNew();
        using IShotSource source = ShotFiles.Open(path, LabFile.Wide, DetectorKind.Counting);
        Assert.Equal(400_000, source.ReadBlocks().Sum(b => b.Codes!.Length));
        Assert.True(clock.Elapsed < TimeSpan.FromSeconds(20), $"{clock.Elapsed}");
    }

    /// <summary>One field of 40 MB.</summary>
    [Theory]
    [InlineData('7')]
    [InlineData('"')]
    [InlineData('\0')]
    public void Open_EndlessField_IsRefusedInTime(char fill) =>
        Bounded(() => Open(Csv("time (us),shot_0,shot_1\n0,1,0\n10," + new string(fill, 40_000_000) + ",0\n")), megabytes: 800);

    [SkippableTheory]
    [InlineData("run.csv")]
    [InlineData("run_shots.csv")]
    public void Open_UnreadableCsv_IsRefused(string name)
    {
        string path = Csv("time (us),shot_0,shot_1\n0,1,0\n10,2,0\n");
        LetOthersIn();
        Forbid(Path.Combine(_folder, name));
        Unprivileged.Run(() =>
        {
            Fault fault = Bounded(() => Open(path));
            Assert.Contains("cannot be opened", fault.Found, StringComparison.Ordinal);
            Assert.Equal(name, fault.Where);
            Assert.Contains("permission", fault.Remedy, StringComparison.Ordinal);
        });
    }

    /// <summary>A day's folder, and a folder of traces, without permission.</summary>
    [SkippableFact]
    public void Open_FolderWithoutPermission_IsRefused()
    {
        string closed = Path.Combine(_folder, "closed");
        Directory.CreateDirectory(closed);
        Pipeline.Configuration.LabConfiguration lab = Pipeline.Configuration.ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));
        LetOthersIn();
        Forbid(closed);
        Unprivileged.Run(() =>
        {
            foreach (Action act in (Action[])[() => Pipeline.Night.DayFolder.Open(closed, lab), () => FileSketches.Of(closed)])
                Assert.Contains("a folder that cannot be read", Bounded(act).Found, StringComparison.Ordinal);
        });
    }

    [SkippableFact]
    public void Open_UnreadableHdf5_IsRefusedByBothReaders()
    {
        string path = Hdf5();
        Forbid(path);
        Unprivileged.Run(() =>
        {
            foreach (Hdf5Reader reader in Readers)
                Assert.Contains("cannot be opened", Bounded(() => ShotFiles.Open(path, LabFile.Matrix, DetectorKind.Counting, new Hdf5Access(reader)).Dispose()).Found, StringComparison.Ordinal);
        });
    }

    /// <summary>Bytes of the file's skeleton turned over, for both readers: a fault or numbers of the right shape, never a crash or a hang.</summary>
    [Theory]
    [InlineData(Hdf5Reader.Best)]
    [InlineData(Hdf5Reader.Managed)]
    public void Open_CorruptedSkeleton_EndsInTime(Hdf5Reader reader)
    {
        string path = Hdf5();
        byte[] whole = File.ReadAllBytes(path);
        var random = new Random(2);
        var clock = Stopwatch.StartNew();
        int refused = 0;
        for (int trial = 0; trial < 150; trial++)
        {
            byte[] bad = [.. whole];
            for (int k = 0; k < 3; k++) bad[random.Next(Math.Min(bad.Length, 6000))] ^= (byte)(1 + random.Next(255));
            File.WriteAllBytes(path, bad);
            try
            {
                using IShotSource source = ShotFiles.Open(path, LabFile.Matrix, DetectorKind.Counting, new Hdf5Access(reader));
                foreach (var block in source.ReadBlocks()) Assert.Equal(source.Shape.Samples, block.Samples);
            }
            catch (DataFaultException e)
            {
                refused++;
                Assert.NotEmpty(e.Fault.Remedy);
            }
        }
        Assert.True(refused > 20, $"{refused} of 150 refused");
        Assert.True(clock.Elapsed < TimeSpan.FromSeconds(100), $"{clock.Elapsed}");
    }

    [Theory]
    [InlineData(0.05)]
    [InlineData(0.5)]
    [InlineData(0.95)]
    public void Open_TruncatedHdf5_IsRefusedByBothReaders(double share)
    {
        string path = Hdf5();
        byte[] whole = File.ReadAllBytes(path);
        File.WriteAllBytes(path, whole[..(int)(share * whole.Length)]);
        foreach (Hdf5Reader reader in Readers)
            Bounded(() => ShotFiles.Open(path, LabFile.Matrix, DetectorKind.Counting, new Hdf5Access(reader)).Dispose());
    }

    static Hdf5Reader[] Readers => Hdf5Files.HasLibrary ? [Hdf5Reader.Library, Hdf5Reader.Managed] : [Hdf5Reader.Managed];

    /// <summary>A fault within 10 s and a few hundred megabytes, with everything said.</summary>
    static Fault Bounded(Action act, int megabytes = 200)
    {
        var clock = Stopwatch.StartNew();
        long before = GC.GetAllocatedBytesForCurrentThread();
        Fault fault = Assert.ThrowsAny<DataFaultException>(act).Fault;
        Assert.True(clock.Elapsed < TimeSpan.FromSeconds(10), $"{clock.Elapsed}");
        Assert.InRange((GC.GetAllocatedBytesForCurrentThread() - before) / 1_000_000, 0, megabytes);
        Assert.NotEmpty(fault.Where);
        Assert.NotEmpty(fault.Found);
        Assert.NotEmpty(fault.Expected);
        Assert.NotEmpty(fault.Remedy);
        Assert.True(fault.Found.Length < 500, $"{fault.Found.Length} characters");
        return fault;
    }

    void LetOthersIn()
    {
        if (OperatingSystem.IsWindows()) return;
        File.SetUnixFileMode(_folder, UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.UserExecute | UnixFileMode.GroupRead | UnixFileMode.GroupExecute | UnixFileMode.OtherRead | UnixFileMode.OtherExecute);
        foreach (string file in Directory.GetFiles(_folder)) File.SetUnixFileMode(file, UnixFileMode.UserRead | UnixFileMode.GroupRead | UnixFileMode.OtherRead);
    }

    static void Forbid(string path)
    {
        if (!OperatingSystem.IsWindows()) File.SetUnixFileMode(path, UnixFileMode.None);
    }

    static void Open(string path)
    {
        using IShotSource source = ShotFiles.Open(path, LabFile.Wide, DetectorKind.Counting);
        _ = source.ReadBlocks().Count();
    }

    string Csv(string samples, string table = Table)
    {
        string path = Path.Combine(_folder, "run.csv");
        File.WriteAllText(path, samples);
        File.WriteAllText(Path.Combine(_folder, "run_shots.csv"), table);
        return path;
    }

    string Hdf5()
    {
        var plan = new RunPlan { Conditions = ["off"], Signal = 8, NoAblation = 3, ProbeBlocked = 2, Dark = 2, Samples = 400, Step = 20e-6 };
        string path = Path.Combine(_folder, "run.h5");
        Writers.Hdf5(path, plan, Simulate.Run(new Scene(), Day.Usual, plan, 3));
        return path;
    }
}
