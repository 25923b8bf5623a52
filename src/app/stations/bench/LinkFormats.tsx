/** What a device must speak, for whoever writes its firmware. */
export function LinkFormats() {
  return (
    <details className="link-formats">
      <summary>What the device must speak</summary>
      <p>Text in UTF-8, one line each, ended by LF, CR LF or CR; at most 4096 bytes a line.</p>
      <h4>CSV lines</h4>
      <pre>{'n,t,roll_rad,tilt_rad\n0,0.000,0.0100,0.0000\n1,0.001,0.0101,-0.0012'}</pre>
      <p>
        A header of names first, and again after a reset. Then as many numbers. A column called n that goes up
        by one a line lets lost lines be counted; t is the time in seconds.
      </p>
      <h4>or JSON lines</h4>
      <pre>{'{"n":0,"t":0.000,"roll_rad":0.0100}'}</pre>
      <p>The first object fixes the names.</p>
      <h4>Notes</h4>
      <pre>{'# battery low'}</pre>
      <h4>Commands to it, and its answers</h4>
      <pre>
        {
          '>1,clear,schedule\n<1,ok\n>2,point,0,0.000,0.1000,-0.1000\n<2,ok\n>9,use,schedule,7\n<9,ok\n>10,gain,lean,1.25\n<10,no,loop is off'
        }
      </pre>
      <p>
        point: its number, its time in s, then a tilt in rad for each gimbal. A line with no answer within 0.5
        s is sent again, four times in all: answer a number seen before without acting twice.
      </p>
      <h4>Stop</h4>
      <p>The stop line is sent as it stands, with no number, ahead of everything, and needs no answer.</p>
    </details>
  );
}
